substrate glucose
product   ethanol, lactate, acetate, CO2
inside    pyruvate
carrier   NADH carries 2 electrons
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    lactic     : pyruvate + NADH -> lactate
    # NADH that this would make has nowhere to go: fermentation needs a pyruvate for each.
    # expect: blocked-reaction "acetic"
    acetic     : pyruvate -> acetate + CO2 + NADH
