substrate glucose, oxygen
product   ethanol, CO2
inside    pyruvate, dye, dye-empty
carrier   NADH carries 2 electrons
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    respire    : NADH + 0.5 oxygen -> nothing
compartment dyes
    # expect: electrons-from-nothing "load"
    load       : dye-empty -> dye + NADH
    unload     : dye -> dye-empty
