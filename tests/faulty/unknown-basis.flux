# expect: unknown-basis "mol/kg/day"
basis mol/kg/day
substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
