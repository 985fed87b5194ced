substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
# expect: limit-against-role "glucose out"
limit glucose out <= 1
# expect: limit-against-role "ethanol in"
limit ethanol in <= 1
