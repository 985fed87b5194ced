substrate glucose
# expect: missing-comma "ethanol CO2" certain
product   ethanol CO2
# expect: missing-comma "lactate formate" certain
product   lactate formate
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    lactic  : glucose -> 2 lactate
    split   : CO2 + ethanol -> formate + ethanol accept same-on-both-sides: it is a test
variant narrow
    # expect: missing-comma "lactic split" certain
    drop lactic split
