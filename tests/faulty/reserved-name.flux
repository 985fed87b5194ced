substrate glucose
# expect: reserved-name "mu"
product   ethanol, CO2, mu
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: reserved-name "nothing" 2
    nothing-made : glucose -> 2 ethanol + 2 CO2 + nothing
# expect: reserved-name "base"
variant base
    limit glucose <= 1
