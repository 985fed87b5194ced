substrate glucose
product   ethanol, CO2
substrate fructose
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: wide-coefficients "odd"
    odd     : 1e12 glucose + 1e-12 fructose ->
                2000000000000.000000000002 ethanol + 2000000000000.000000000002 CO2
