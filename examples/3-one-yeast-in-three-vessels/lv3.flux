# Organism     LV-3, an invented yeast on glucose, ammonia and air.
# Sources      General biochemistry, from memory; the numbers of the strain are invented.
# Assumptions  Pyruvate stands for all that lies between sugar and respiration.

model      LV-3 on glucose
basis      mmol/g/h

substrate  glucose
substrate  ammonia, oxygen
product    ethanol, acetate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
inside     pyruvate

parameter  PO  = 1.2 ± 0.15  in [0.5, 2]     # mol ATP per atom of oxygen
parameter  K_X = 1.9 ± 0.25  in [1, 3]       # mol ATP per C-mol of biomass

compartment sugar
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ferment    : pyruvate + NADH -> ethanol + CO2
    oxidise    : pyruvate -> acetate + CO2 + NADH

compartment respiration
    burn       : pyruvate -> 3 CO2 + 5 NADH + ATP
    oxphos     : NADH + 0.5 oxygen -> PO ATP

compartment anabolism
    growth     : ? glucose + 0.2 ammonia + K_X ATP -> X + 0.1 CO2 + ? NADH

compartment maintenance
    upkeep     : ATP -> nothing
