substrate glucose
product   lactate
carrier   NADH
inside    pyruvate
parameter b = 0.4 ± 0.1
parameter c = 0.1 in [0, 0.5]
parameter d = 1 in [0, 3]
compartment catabolism
    # expect: divides-by-zero-in-range "(1/(0.5 - b)) glucose"
    within : (1/(0.5 - b)) glucose -> (4/(1 - 2*b)) pyruvate + ? NADH
    # expect: divides-by-zero-in-range "(1/(0.5 - c)) pyruvate"
    edge   : (1/(0.5 - c)) pyruvate + ? NADH -> ? lactate
    # expect: divides-by-zero-in-range "(1/((d - 2)*(d - 2))) pyruvate"
    touch  : (1/((d - 2)*(d - 2))) pyruvate + ? NADH -> ? lactate
    # expect: divides-by-zero-in-range "(1/(0.8 - b*c*d)) pyruvate"
    many   : (1/(0.8 - b*c*d)) pyruvate + ? NADH -> ? lactate
    clear  : (1/(0.7 - b)) pyruvate + ? NADH -> ? lactate
