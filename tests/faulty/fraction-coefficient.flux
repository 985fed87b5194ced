substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: fraction-coefficient "1/2" certain
    ferment : 1/2 glucose -> ethanol + CO2
    # expect: fraction-coefficient "½" certain
    other   : ½ glucose -> ethanol + CO2
