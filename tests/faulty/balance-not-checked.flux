substrate glucose
product   ethanol, CO2
# expect: balance-not-checked "middle"
inside    middle
compartment catabolism
    upper : glucose -> middle
    lower : middle -> 2 ethanol + 2 CO2
