"""Stock: what can be bought and what machines usually do, as data tables with their source.

`tables` reads the TOML files in data/, one at a time and only when asked; `wire`, `metals`, `sheet`,
`connectors`, `hardware` and `processes` are the typed look-ups over them. Every look-up that fails says
what is allowed and which is nearest. Every value can be overridden in a recipe by one that was measured.
"""
