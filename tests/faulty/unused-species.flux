substrate glucose
# expect: unused-species "lactate"
product   ethanol, lactate, CO2
product   acetate
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
variant mixed
    add to catabolism
        acids : glucose -> 3 acetate
