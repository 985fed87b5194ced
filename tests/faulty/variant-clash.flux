substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
variant slow
    limit glucose <= 1
variant quick
    # expect: variant-clash "glucose <= 9"
    limit glucose <= 9
variant both from slow, quick
    limit ethanol <= 4
