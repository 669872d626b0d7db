"""What people read on paper: dimensioned drawings (DXF and PDF) and the build sheet (PDF).

One plane description (`model`) of each drawing is laid out once (`layout`) and written by two writers
(`dxfsheet`, `pdf`), so both files show the same. Loads no CAD kernel. Only `build` comes here: the typesetting
and plane-geometry libraries are too slow to load for `check`.
"""
