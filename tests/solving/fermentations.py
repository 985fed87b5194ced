"""Networks of a few reactions that several tests fit, and looks at what was found."""

from __future__ import annotations

FERMENT = """
substrate glucose
product ethanol
exchange CO2
ferment : glucose -> 2 ethanol + 2 CO2
"""

# One parameter; ethanol tells it as well as its own value does.
TUNED = """
substrate A
product B
parameter k 2 0.1
make : A -> k B
"""

YEAST = """
substrate glucose, oxygen
product ethanol, glycerol
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
parameter PO 1.4 0.2
parameter K_X 2 0.3
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
reduce : glucose + 2 ATP + 2 NADH -> 2 glycerol
adh : pyruvate + NADH -> ethanol + CO2
burn : pyruvate -> 3 CO2 + 5 NADH + ATP
oxphos : NADH + 0.5 oxygen -> PO ATP
growth : 0.2 glucose + K_X ATP -> X + 0.2 CO2 + 0.1 NADH
upkeep : ATP -> nothing
"""
PARALLEL = """
substrate glucose
product ethanol
inside a
take : glucose -> a
left : a -> ethanol
right : a -> ethanol
"""

RATES = (
    "glucose in 10 ± 0.5", "ethanol out 12 ± 0.6", "CO2 out 19 ± 1", "oxygen in 5 ± 0.3",
    "X out 8 ± 0.4", "upkeep 12 ± 4",
)


def value_of(fit, name):
    return fit.fluxes[fit.reactions.index(name)]


def row_of(fit, words):
    return next(r for r in (*fit.rows, *fit.rates) if str(r.quantity) == words)
