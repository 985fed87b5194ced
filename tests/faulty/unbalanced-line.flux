substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: unbalanced-line "3 CO2"
    ferment : glucose -> 2 ethanol + 3 CO2
