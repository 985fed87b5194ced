substrate glucose, oxygen
product   ethanol, CO2
exchange  H2O
compartment catabolism
    burn   : glucose + 6 oxygen -> 6 CO2 + 6 H2O
    # expect: unbalanced-line "3 H2O"
    wet    : glucose -> 2 ethanol + 2 CO2 + 3 H2O
