"""Elementary flux modes: the smallest sets of reactions that can run in a steady state."""
