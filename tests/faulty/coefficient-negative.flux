substrate glucose
product   ethanol, CO2, lactate
carrier   NADH carries 2 electrons
compartment catabolism
    # expect: coefficient-negative "? NADH"
    ferment : glucose -> ? ethanol + CO2 + ? NADH
