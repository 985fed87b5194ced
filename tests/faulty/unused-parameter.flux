substrate glucose
product   ethanol, CO2
# expect: unused-parameter "PO"
parameter PO = 1.4 ± 0.2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
