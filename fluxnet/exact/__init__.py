"""Floor 1: linear algebra over the rationals."""
