# Strain SW-9 of Saltwick Resins (company, strain and numbers are invented; the reactions are general
# biochemistry, lumped). One mole of X is one C-mol; rates per gram of dry weight, ash included.

model      SW-9, four ways to 3-hydroxypropionate
basis      mmol/g/h

substrate  glucose, xylose
substrate  ammonia, oxygen
product    3-hydroxypropionate, 1,3-propanediol, acetate, ethanol, formate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP          carries energy
carrier    NADH         carries 2 electrons
carrier    NADPH        carries 2 electrons
inside     T3P, pyruvate, acetyl-CoA, 3-hydroxypropanal
inside     hexose-P     C6H13O9P
inside     pentose-P    C5H11O8P
inside     malonate-sa  C3H4O3  # malonate semialdehyde

parameter  PO  = 1.4 ± 0.2  in [0.5, 2]  # mol ATP per atom of oxygen
parameter  K_X = 2.1 ± 0.3  in [1, 3.5]  # mol ATP per C-mol of biomass, beside its precursors

compartment sugar
    hexose-in  : glucose + ATP -> hexose-P
    pentose-in : xylose + 2 ATP -> pentose-P  # one for the pump, one for the kinase
    oxidise    : hexose-P -> pentose-P + CO2 + 2 NADPH
    shuffle    : 3 pentose-P <-> 2 hexose-P + T3P
    split      : hexose-P + ATP -> 2 T3P
    lower      : T3P -> pyruvate + 2 ATP + NADH

compartment ways
    malonyl   : acetyl-CoA + CO2 + ATP + NADPH -> malonate-sa
    aspartate : pyruvate + ATP -> malonate-sa    # by oxaloacetate; its CO2 comes off again
    alanine   : pyruvate -> malonate-sa          # the amino group is lent, as in the line above
    reduce    : malonate-sa + NADPH -> 3-hydroxypropionate
    glycerol  : T3P + NADH -> 3-hydroxypropanal  # the phosphate is lost
    oxidise-3 : 3-hydroxypropanal -> 3-hydroxypropionate + NADH
    reduce-3  : 3-hydroxypropanal + NADH -> 1,3-propanediol

compartment overflow
    pyr-ox : pyruvate -> acetyl-CoA + CO2 + NADH
    pyr-ly : pyruvate -> acetyl-CoA + formate
    ack    : acetyl-CoA -> acetate + ATP
    adh    : acetyl-CoA + 2 NADH -> ethanol

compartment respiration
    cycle  : acetyl-CoA -> 2 CO2 + 4 NADH + ATP
    oxphos : NADH + 0.5 oxygen -> PO ATP

compartment anabolism
    growth : ? hexose-P + ? ammonia + 0.4 NADPH + K_X ATP -> X + 0.1 CO2 + ? NADH

compartment maintenance
    upkeep : ATP -> nothing

limit      glucose <= 5
limit      xylose <= 6
limit      upkeep >= 2

variant malonyl "by malonyl-CoA: two NADPH, and an ATP for the CO2"
    drop  aspartate, alanine, glycerol, oxidise-3, reduce-3, 3-hydroxypropanal, 1,3-propanediol
variant aspartate "by aspartate: one NADPH, and an ATP for the CO2"
    drop  malonyl, alanine, glycerol, oxidise-3, reduce-3, 3-hydroxypropanal, 1,3-propanediol
variant alanine "by alanine: one NADPH"
    drop  malonyl, aspartate, glycerol, oxidise-3, reduce-3, 3-hydroxypropanal, 1,3-propanediol
variant glycerol "by glycerol: the NADH comes back, a phosphate is lost"
    drop  malonyl, aspartate, alanine, reduce, malonate-sa

variant sealed "the tank without air"
    limit  oxygen <= 0
variant tank "what the old tank gives: 16 mmol/L/h for 20 g/L of cells"
    limit  oxygen <= 0.8
variant stirred "what a stirred vessel would give: 100 mmol/L/h for 20 g/L of cells"
    limit  oxygen <= 5

variant on-glucose
    limit  xylose <= 0
variant on-xylose
    limit  glucose <= 0
variant growing
    limit  mu >= 0.04
