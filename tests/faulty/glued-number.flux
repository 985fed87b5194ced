substrate glucose
product   ethanol, CO2
parameter a = 2
compartment catabolism
    # expect: glued-number "2ethanol" certain
    ferment : glucose -> 2ethanol + 2 CO2
    # expect: glued-number "0.5glucose" certain
    half    : 0.5glucose -> ethanol + CO2
    # expect: glued-number "2" certain
    twice   : glucose -> (2a/2) ethanol + 2 CO2
