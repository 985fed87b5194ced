"""Floor 6: whole answers: closure, fluxes."""
