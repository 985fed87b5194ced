substrate glucose
product   ethanol
exchange  CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
# expect: limit-needs-direction "CO2"
limit CO2 <= 1
# expect: limit-needs-direction "CO2"
limit CO2 between in 1 and 5
limit CO2 / glucose = 2
