substrate glucose
product   ethanol
exchange  CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
limit glucose >= 4
# expect: contradictory-limits "glucose <= 3"
limit glucose <= 3
# expect: contradictory-limits "between 5 and 2" certain
limit ethanol between 5 and 2
limit CO2 in >= 1
# expect: contradictory-limits "CO2 out >= 1"
limit CO2 out >= 1
