substrate glucose
product   ethanol, CO2
# expect: unknown-element "Q"
product   aroma C8H10Q
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
