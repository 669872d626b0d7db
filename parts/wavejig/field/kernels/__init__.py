"""Compiled loops. No module here calls into another: numba's cache on disk is checked against the file of
the compiled function only, so whatever is compiled together must live in one file.
"""
