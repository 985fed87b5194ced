substrate glucose, xylose
product   ethanol, lactate, formate, acetate, H2
exchange  CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    lactic : xylose -> ? lactate
# expect: bad-limit "-3"
limit glucose <= -3
# expect: bad-limit "<" certain
limit ethanol < 3
# expect: bad-limit "xylose 8"
limit xylose 8
# expect: bad-limit "mmol/g/h" certain
limit CO2 in <= 3 mmol/g/h
# expect: bad-limit "1 <= lactate <= 3" certain
limit 1 <= lactate <= 3
# expect: bad-limit "uptake" certain
limit xylose uptake <= 3
# expect: bad-limit "at most" certain
limit formate at most 3
# expect: bad-limit "to" certain
limit acetate between 1 to 3
# expect: bad-limit "± 0.1"
limit H2 <= 3 ± 0.1
# expect: bad-limit "± 0" certain
limit lactic = 3 ± 0
# expect: bad-limit "ferment in"
limit ferment in <= 3
# expect: bad-limit "5 >= H2" certain
limit 5 >= H2
