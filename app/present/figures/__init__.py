"""Figures as SVG text. Numbers come in; nothing is computed but positions."""
