substrate glucose
product   ethanol, CO2
carrier   NADH carries 2 electrons
parameter a = 0.5 in [0.1, 0.9]
compartment catabolism
    sound  : a glucose -> (2 * a) ethanol + (2 * a) CO2
    # expect: unbalanced-line "CO2"
    shared : a glucose -> (2 * a) ethanol + CO2
    # expect: unbalanced-line "missing"
    missing : glucose -> 1 ethanol + 4 CO2
