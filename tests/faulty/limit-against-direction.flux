substrate glucose
product   ethanol, lactate, CO2
carrier   NADH
inside    pyruvate
compartment catabolism
    gly : glucose -> 2 pyruvate + 2 NADH
    eth : pyruvate + NADH -> ethanol + CO2
    ldh : pyruvate + NADH <-> lactate
limit ldh between -2 and -1
limit gly / ldh >= -3
# expect: limit-against-direction "eth <= -1"
limit eth <= -1
# expect: limit-against-direction "gly = -0.5 ± 0.1"
limit flux gly = -0.5 ± 0.1
variant backwards
    # expect: limit-against-direction "eth between -3 and -2"
    limit eth between -3 and -2
