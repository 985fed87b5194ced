substrate glucose
product   ethanol, CO2
# expect: biomass-without-carbon "H1.8O0.5N0.2"
biomass   X H1.8O0.5N0.2 ash 8 %
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
