substrate glucose
product   ethanol, CO2
parameter a = 1
compartment catabolism
    # expect: division-by-zero "2/(a - a)"
    ferment : glucose -> (2/(a - a)) ethanol + 2 CO2
    # expect: division-by-zero "((2 - 2*a)/(1 - a)) ethanol"
    second  : glucose -> ((2 - 2*a)/(1 - a)) ethanol + 2 CO2
