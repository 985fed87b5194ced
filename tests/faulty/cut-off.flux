substrate glucose
product   ethanol, CO2, lactate, acetate
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
compartment forgotten
    # expect: cut-off "turn"
    turn    : lactate -> 1.5 acetate
