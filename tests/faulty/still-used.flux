substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: still-used "2 ethanol"
    ferment : glucose -> 2 ethanol + 2 CO2
variant slow
    drop ethanol
