substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: duplicate-reaction "again"
    again   : glucose -> 2 CO2 + 2 ethanol
