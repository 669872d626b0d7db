"""wavejig: from one recipe to the files, tables and figures for making equal loop antennas."""

__version__ = "0.1.0"
