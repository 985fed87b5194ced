substrate glucose
product   ethanol, CO2
parameter Share = 0.5
# expect: case-differs "share"
parameter share = 0.5
compartment catabolism
    # expect: case-differs "Ethanol" certain
    ferment : glucose -> 2 Ethanol + 2 CO2
    second  : glucose -> 2 Ethanol + 2 CO2
    third   : (Share + share) glucose -> ? ethanol + ? CO2
    # expect: case-differs "sharE" certain
    fourth  : (2*sharE) glucose -> ? ethanol + ? CO2
# expect: case-differs "Ferment" certain
limit Ferment <= 3
