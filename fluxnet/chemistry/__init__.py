"""Floor 1: elements, formulas, the catalogue of compounds, units."""
