# Acetate from glucose in air by a strain without fermentation, citric acid cycle or ATP synthase.
# Source   Causey et al. 2003, PNAS 100:825 (PMC298686; read there): strain TC36 made 572 mM acetate
#          of 333 mM glucose. 1.718 mol/mol, 57.3 % of the carbon and 85.9 % of 2 mol/mol were
#          computed from these. The network is general biochemistry, from memory.
model      Acetate alone, in air
basis      mmol

substrate  glucose, ammonia, oxygen
product    acetate, CO2
biomass    X  CH1.8O0.5N0.2  ash 0 %
carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
inside     G6P, T3P, PEP, pyruvate, acetyl-CoA

parameter  K_X = 2.1  # mol ATP per C-mol of biomass, from memory

compartment catabolism
    pts : glucose + PEP -> G6P + pyruvate
    pfk : G6P + ATP -> 2 T3P
    gap : T3P -> PEP + NADH + ATP
    pyk : PEP -> pyruvate + ATP
    pdh : pyruvate -> acetyl-CoA + CO2 + NADH
    ack : acetyl-CoA -> acetate + ATP

compartment respiration
    oxidase : NADH + 0.5 oxygen -> nothing

compartment anabolism
    growth : ? G6P + 0.2 ammonia + K_X ATP -> X + 0.1 CO2 + ? NADH

compartment maintenance
    upkeep : ATP -> nothing
