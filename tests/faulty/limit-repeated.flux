substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
limit glucose >= 1
limit glucose <= 3
# expect: limit-repeated "glucose <= 4"
limit glucose <= 4
limit ferment = 1.2 ± 0.3
# expect: limit-repeated "ferment = 1.3 ± 0.3"
limit ferment = 1.3 ± 0.3
limit ferment <= 5
