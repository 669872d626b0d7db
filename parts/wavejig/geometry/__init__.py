"""Value types every part speaks in: 3D wire paths (`path`) and plane cut contours (`plane`).

Lengths in mm, angles in degrees. Imports numpy only.
"""
