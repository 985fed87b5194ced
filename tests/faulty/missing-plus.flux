substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: missing-plus "ethanol 2 CO2" certain
    ferment : glucose -> 2 ethanol 2 CO2
    # expect: missing-plus "ethanol CO2" certain
    half    : 0.5 glucose -> ethanol CO2
    # expect: missing-plus "," certain
    other   : glucose -> 2 ethanol, 2 CO2
