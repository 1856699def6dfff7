"""Figures as SVG: one file a kind of chart, drawn the same way on every machine."""
