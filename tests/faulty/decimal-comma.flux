substrate glucose
product   ethanol, CO2
# expect: decimal-comma "CH1,8O0,5N0,2" certain
biomass   X CH1,8O0,5N0,2 ash 8 %
# expect: decimal-comma "1,4" certain
# expect: decimal-comma "0,5" certain
parameter PO = 1,4 ± 0.2 in [0,5, 2.5]
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: decimal-comma "0,5" certain
    half    : 0,5 glucose -> (PO/PO) ethanol + CO2
    # expect: decimal-comma "1,5" certain
    more    : 1.5 glucose -> 3 ethanol + (2*1,5) CO2
# expect: decimal-comma "2,5" certain
limit glucose <= 2,5
