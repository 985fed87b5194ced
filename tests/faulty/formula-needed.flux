substrate glucose
# expect: formula-needed "aroma"
product   ethanol, CO2, aroma
# expect: formula-needed "X"
biomass   X ash 8 %
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    lost : glucose -> aroma
