substrate glucose
product   ethanol, CO2
# expect: bad-parameter "K-X"
parameter K-X = 2.1
# expect: bad-parameter "a" 3 certain
parameter a 1
# expect: bad-parameter ":=" certain
parameter b := 1
# expect: bad-parameter "3/2" certain
parameter c = 3/2
# expect: bad-parameter "mmol/g/h" certain
parameter d = 1.2 mmol/g/h
# expect: bad-parameter "2.5, 0.5" certain
parameter e = 1 in [2.5, 0.5]
# expect: bad-parameter "-0.2"
parameter g = 1 ± -0.2
# expect: bad-parameter "[0, 2]" certain
parameter h = 1 [0, 2]
# expect: bad-parameter "twice"
parameter k = twice
compartment catabolism
    ferment : (a*b*c*d*e*h) glucose -> ? ethanol + ? CO2
