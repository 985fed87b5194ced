substrate glucose
product   ethanol, CO2
parameter PO = 2
compartment catabolism
    ferment : PO glucose -> (2*PO) ethanol + (2*PO) CO2
    # expect: unknown-parameter "PQ"
    second  : glucose -> PQ ethanol + 2 CO2
    # expect: unknown-parameter "yield_x"
    third   : glucose -> (2*yield_x) ethanol + 2 CO2
