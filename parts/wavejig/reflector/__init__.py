"""The sheet behind the radiator: one tray feeds the folded solid, the flat blank and the plate model.

`tray` plans it, `mapping` carries points from blank to folded sheet and back, `flat` draws the blank,
`marks` letters it, `outline` holds the plane geometry; `solid` builds the folded part and loads the kernel.
"""
