substrate glucose
product   ethanol, CO2
parameter a = 1
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: coefficient-not-positive "0 CO2"
    first   : glucose -> 2 ethanol + 2 CO2 + 0 CO2
    # expect: coefficient-not-positive "-2 ethanol"
    second  : glucose + -2 ethanol -> 2 CO2
    # expect: coefficient-not-positive "(a - 1) glucose"
    third   : (a - 1) glucose -> ? ethanol + ? CO2
