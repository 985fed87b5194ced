substrate glucose
product   ethanol, CO2
# expect: outside-range "3.0"
parameter a = 3.0 ± 0.2 in [0.5, 2.5]
parameter b = 1.0 in [0.5, 2.5]
compartment catabolism
    ferment : (a*b) glucose -> (2*a*b) ethanol + (2*a*b) CO2
variant rich
    # expect: outside-range "4"
    set b = 4
