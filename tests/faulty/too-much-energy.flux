# expect: too-much-energy "glucose"
substrate glucose
product   ethanol, CO2
inside    pyruvate
carrier   ATP  carries energy
carrier   NADH carries 2 electrons
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 12 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    upkeep     : ATP -> nothing
