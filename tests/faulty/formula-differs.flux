substrate glucose C6H12O6
substrate xylose  C5H8O4
# expect: formula-differs "C2H4O2"
product   ethanol C2H4O2
product   CO2, acetate C2H3O2(-)
carrier   QH2 carries 2 electrons
# expect: formula-differs "1 electrons"
carrier   NADH carries 1 electrons
compartment catabolism
    ferment : glucose -> 3 acetate
