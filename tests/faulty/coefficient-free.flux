substrate glucose
product   ethanol, CO2
carrier   ATP carries energy
compartment catabolism
    # expect: coefficient-free "? ATP"
    ferment : glucose -> 2 ethanol + 2 CO2 + ? ATP
    upkeep  : ATP -> nothing
