"""The bent wire: centreline, pieces, bend tables, joints. `solid` sweeps it and loads the kernel."""
