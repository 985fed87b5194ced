"""Five small pathways whose best yields are worked out by hand, for tests of comparisons."""

from __future__ import annotations

HEAD = """\
substrate  glucose, oxygen
exchange   CO2
carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
inside     pyruvate
"""

UPKEEP = """\
compartment maintenance
    upkeep : ATP -> nothing
"""

# glucose -> 2 ethanol + 2 CO2, 2 ATP: all 24 electrons in ethanol (12 each)
ETHANOL = f"""{HEAD}
product    ethanol
compartment c
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
{UPKEEP}"""

# glucose -> 2 lactate: all electrons and all carbon
LACTATE = f"""{HEAD}
product    lactate
compartment c
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ldh        : pyruvate + NADH -> lactate
{UPKEEP}"""

# glucose + 2 O2 -> 2 acetate + 2 CO2: 4 NADH burnt; a third of the carbon leaves as CO2
ACETATE = f"""{HEAD}
product    acetate
compartment c
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pox        : pyruvate -> acetate + CO2 + NADH + ATP
    oxphos     : NADH + 0.5 oxygen -> ATP
{UPKEEP}variant anaerobic
    limit oxygen <= 0
"""

# x of the two trioses become glycerol, 2 - x are burnt (6 NADH and 3 ATP each), r NADH respired
# (1 ATP each):  ATP  3 (2 - x) + r = 2,  NADH  6 (2 - x) = x + r;  so x = 8/5, r = 4/5.
GLYCEROL = f"""{HEAD}
product    glycerol
inside     triose-P  C3H7O6P
compartment c
    upper  : glucose + 2 ATP -> 2 triose-P
    reduce : triose-P + NADH -> glycerol
    lower  : triose-P -> pyruvate + 2 ATP + NADH
    burn   : pyruvate -> 3 CO2 + 5 NADH + ATP
    oxphos : NADH + 0.5 oxygen -> ATP
{UPKEEP}"""

# glucose + 1.5 O2 -> citrate: 3 NADH are left over, and burnt; ATP 2 - 1 + 3
CITRATE = f"""{HEAD}
product    citrate
inside     acetyl-CoA, oxaloacetate
compartment c
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pdh        : pyruvate -> acetyl-CoA + CO2 + NADH
    pyc        : pyruvate + CO2 + ATP -> oxaloacetate
    cs         : acetyl-CoA + oxaloacetate -> citrate
    oxphos     : NADH + 0.5 oxygen -> ATP
{UPKEEP}variant anaerobic
    limit oxygen <= 0
"""
