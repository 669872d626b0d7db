"""Writers of the files machines and people read, each beside the check that reads its file back.

A writer (`write_*`) puts one file on disk and lets an OSError through; its check (`check_*`) opens that file
with a second reader and raises FileCheckError on the first thing that is not as it should be. Same input,
same bytes: no clock, no counter of the process, no folder name gets into a file.

Lengths in mm. `dxf`, `dxfcheck` and `names` do without the CAD kernel; the rest loads it by way of `mesh`.
"""
