substrate glucose
product   ethanol, CO2
parameter b = 1
compartment catabolism
    # expect: starred-coefficient "2*b" certain
    ferment : b glucose -> 2*b ethanol + (2*b) CO2
    # expect: starred-coefficient "2 b" certain
    second  : b glucose -> (2*b) ethanol + 2 b CO2
    # expect: starred-coefficient "2 * ethanol" certain
    third   : glucose -> 2 * ethanol + 2 CO2
