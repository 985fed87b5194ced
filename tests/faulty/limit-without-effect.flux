substrate glucose
product   ethanol, lactate, CO2
carrier   NADH
inside    pyruvate
compartment catabolism
    gly : glucose -> 2 pyruvate + 2 NADH
    eth : pyruvate + NADH -> ethanol + CO2
    ldh : pyruvate + NADH <-> lactate
limit ldh >= -2
# expect: limit-without-effect "eth >= -1"
limit eth >= -1
# expect: limit-without-effect "gly between -1 and 3"
limit gly between -1 and 3
