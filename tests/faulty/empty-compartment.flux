substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
# expect: empty-compartment "maintenance"
compartment maintenance
compartment later
variant wide
    add to later
        second : glucose -> 2 ethanol + 2 CO2
