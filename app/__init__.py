"""Armslength: read a published two-arm trial back to its fourfold table, and check what was printed."""

__version__ = "0.4.0"
