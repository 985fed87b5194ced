substrate glucose
product   ethanol, CO2
# expect: bad-formula "("
product   aroma C8(H10O
# expect: bad-formula "c8h10o"
product   flavour c8h10o
# expect: bad-formula "C8&H10"
product   scent C8&H10
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
