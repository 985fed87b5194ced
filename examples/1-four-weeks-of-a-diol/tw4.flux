# Organism     TW-4, an invented facultative bacterium that makes 2,3-butanediol with little air.
# Sources      General biochemistry, from memory. Company, strain and all numbers are invented.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h.
# Assumptions  NADPH counts as NADH. The citric acid cycle is one line. Ammonia is the nitrogen.
# Fitted       PO and K_X: values that Tindlewick uses for all its strains, with their errors.
#              upkeep: from three chemostats of TW-4 at 37 °C.

model      TW-4, a maker of 2,3-butanediol
basis      mmol/g/h

substrate  glucose
substrate  ammonia, oxygen
product    2,3-butanediol, acetoin, acetate, ethanol, lactate, CO2
biomass    X  CH1.8O0.5N0.2  ash 7 %

carrier    ATP         carries energy
carrier    NADH        carries 2 electrons
inside     G6P, T3P, pyruvate, acetyl-CoA
inside     acetoin-in  C4H8O2

parameter  PO  = 1.2 ± 0.15  in [0.6, 2]  # mol ATP per atom of oxygen
parameter  K_X = 2.1 ± 0.2  in [1, 4]     # mol ATP per C-mol of biomass

compartment catabolism
    uptake : glucose + ATP -> G6P
    split  : G6P + ATP -> 2 T3P
    lower  : T3P -> pyruvate + 2 ATP + NADH
    pdh    : pyruvate -> acetyl-CoA + CO2 + NADH
    cycle  : acetyl-CoA -> 2 CO2 + 4 NADH + ATP
    oxphos : NADH + 0.5 oxygen -> PO ATP

compartment products
    als  : 2 pyruvate -> acetoin-in + 2 CO2
    bdh  : acetoin-in + NADH -> 2,3-butanediol
    leak : acetoin-in -> acetoin
    ack  : acetyl-CoA -> acetate + ATP
    adh  : acetyl-CoA + 2 NADH -> ethanol
    ldh  : pyruvate + NADH -> lactate

compartment anabolism
    growth : ? G6P + ? ammonia + K_X ATP -> X + 0.1 CO2 + ? NADH

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 4.0 ± 0.4  # mmol ATP/g/h
