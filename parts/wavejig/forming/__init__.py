"""Pure formulas of bending: `wire` (round bar, springback) and `sheet` (allowances, flat lengths).

Lengths in mm, angles in degrees, stresses in MPa, moduli in GPa. Imports the standard library only.
"""
