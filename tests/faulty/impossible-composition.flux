substrate glucose
product   ethanol, CO2
carrier   NADH carries 2 electrons
inside    middle
compartment catabolism
    # expect: impossible-composition "upper"
    upper : glucose -> 2 middle + 2 NADH
    lower : middle + NADH -> ethanol + 2 CO2
