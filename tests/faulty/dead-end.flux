substrate glucose
product   ethanol, CO2
# expect: dead-end "glycerol-3P"
inside    pyruvate, glycerol-3P C3H8O3
carrier   ATP   carries energy
# expect: dead-end "NADPH"
carrier   NADPH carries 2 electrons
carrier   NADH  carries 2 electrons
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    side       : pyruvate + 2 NADH -> glycerol-3P
    reduce     : pyruvate + NADPH -> ethanol + CO2
    upkeep     : ATP -> nothing
