"""The printed standoff: a two-piece block that is pulled out after soldering, or posts that stay.

`plan` does the arithmetic and loads no CAD kernel; `solid` makes the bodies and does.
"""
