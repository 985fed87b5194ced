substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
variant wide
    # expect: unknown-compartment "Catabolism" certain
    add to Catabolism
        second : glucose -> 2 ethanol + 2 CO2
    # expect: unknown-compartment "anabolism"
    add to anabolism
        third  : glucose -> 2 ethanol + 2 CO2
