# Ethanol from xylose: 1.67 mol/mol, 0.51 g/g.
# Source   Table 3 of PMC2446564 (read in print); the network is general
#          biochemistry, from memory.
model      Ethanol from xylose by an isomerase
basis      mmol

substrate  xylose
product    ethanol, CO2
carrier    ATP        carries energy
carrier    NADH       carries 2 electrons
inside     acetaldehyde, pyruvate
inside     hexose-P   C6H13O9P
inside     pentose-P  C5H11O8P
inside     T3P        C3H7O6P

compartment catabolism
    xyk   : xylose + ATP -> pentose-P
    tkt   : 3 pentose-P <-> 2 hexose-P + T3P
    pfk   : hexose-P + ATP -> 2 T3P
    lower : T3P -> pyruvate + 2 ATP + NADH
    pdc   : pyruvate -> acetaldehyde + CO2
    adh   : acetaldehyde + NADH -> ethanol

compartment maintenance
    upkeep : ATP -> nothing

limit      xylose = 1
