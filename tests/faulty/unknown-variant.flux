substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
variant slow
    limit glucose <= 1
# expect: unknown-variant "Slow" certain
variant slower from Slow
    limit ethanol <= 1
# expect: unknown-variant "quick" 2
variant quicker from quick
    limit ethanol <= 2
