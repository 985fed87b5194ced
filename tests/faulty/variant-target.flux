substrate glucose
product   ethanol, CO2
parameter a = 2
compartment catabolism
    ferment : a glucose -> (2*a) ethanol + (2*a) CO2
variant slow
    # expect: variant-target "A" certain
    set A = 2
    # expect: variant-target "fermint"
    drop fermint
