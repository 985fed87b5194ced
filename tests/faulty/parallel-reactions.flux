substrate glucose
product   ethanol, CO2
inside    pyruvate
carrier   NADH carries 2 electrons
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    # expect: parallel-reactions "twofold"
    twofold    : 2 pyruvate + 2 NADH -> 2 ethanol + 2 CO2
    # expect: parallel-reactions "opposite"
    opposite   : 2 pyruvate + 2 NADH -> glucose
