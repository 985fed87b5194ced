substrate glucose
product   ethanol, CO2
inside    G6P, F6P
carrier   ATP carries energy
compartment catabolism
    kinase   : glucose + ATP -> G6P
    isomer   : G6P <-> F6P
    lower    : F6P -> 2 ethanol + 2 CO2 + 3 ATP
    # expect: energy-from-nothing "charge"
    charge   : G6P -> F6P + ATP
    upkeep   : ATP -> nothing
