substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: same-on-both-sides "ethanol" 2
    ferment : glucose + ethanol -> 3 ethanol + 2 CO2
