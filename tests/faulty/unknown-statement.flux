substrate glucose
product   ethanol, CO2
# expect: unknown-statement "subtrate" certain
subtrate oxygen
# expect: unknown-statement "Carrier" certain
Carrier ATP carries energy
# expect: unknown-statement "metabolite"
metabolite pyruvate
# expect: unknown-statement "frobnicate"
frobnicate it all
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
