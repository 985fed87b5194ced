# Organism     A facultative bacterium of the mixed-acid kind with a branch to 2,3-butanediol (as
#              Escherichia coli or a Klebsiella), on glucose, with or without air.
# Sources      General biochemistry, from memory.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of X
#              is one C-mol.
# Assumptions  NADPH counts as NADH: a transhydrogenase exchanges them. Glucose enters by the
#              phosphotransferase system, which pays with PEP. Pyruvate dehydrogenase works
#              without air too. Succinate dehydrogenase and fumarate reductase are one reversible
#              reaction with the quinol QH2. formate-in and succinate-in are formate and succinate
#              inside the cell. The first dehydrogenase saves PN, the oxidase PC mol ATP per two
#              electrons. CO2 for the carboxylation comes from the cell or from outside.
# Fitted       Nothing. PN and PC are usual values with wide errors (textbook ratios of protons
#              would give 1 and 1). K_X is rounded down from the classical mean of 10.5 g of cells
#              per mol ATP, 2.55 mol per C-mol, which counts precursors and upkeep as well.

model      Facultative bacterium, mixed acids and 2,3-butanediol
basis      mmol/g/h

substrate  glucose
substrate  ammonia, oxygen
product    formate, acetate, lactate, ethanol, succinate, hydrogen, 2,3-butanediol
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP           carries energy
carrier    NADH          carries 2 electrons
carrier    QH2           carries 2 electrons
inside     G6P, T3P, PEP, pyruvate, acetyl-CoA, acetoin
inside     oxaloacetate, malate, citrate, 2-oxoglutarate
inside     formate-in    CH2O2
inside     succinate-in  C4H6O4

parameter  PN  = 0.6 ± 0.2  in [0, 1]      # mol ATP per NADH that reduces the quinone
parameter  PC  = 0.8 ± 0.2  in [0.3, 1.3]  # mol ATP per quinol that reduces oxygen
parameter  K_X = 2.1 ± 0.3  in [1, 3.5]    # mol ATP per C-mol of biomass, beside its precursors

compartment sugar
    pts : glucose + PEP -> G6P + pyruvate
    pfk : G6P + ATP -> 2 T3P
    gap : T3P -> PEP + NADH + ATP
    pyk : PEP -> pyruvate + ATP

compartment fermentation
    pfl     : pyruvate -> acetyl-CoA + formate-in
    pdh     : pyruvate -> acetyl-CoA + CO2 + NADH
    for-out : formate-in -> formate
    fhl     : formate-in -> hydrogen + CO2
    ack     : acetyl-CoA -> acetate + ATP
    adh     : acetyl-CoA + 2 NADH -> ethanol
    ldh     : pyruvate + NADH -> lactate
    als     : 2 pyruvate -> acetoin + 2 CO2
    bdh     : acetoin + NADH -> 2,3-butanediol

compartment acids
    ppc     : PEP + CO2 -> oxaloacetate
    mdh     : oxaloacetate + NADH <-> malate
    sdh     : succinate-in <-> malate + QH2
    cs      : acetyl-CoA + oxaloacetate -> citrate
    icd     : citrate -> 2-oxoglutarate + CO2 + NADH
    kgd     : 2-oxoglutarate -> succinate-in + CO2 + NADH + ATP
    suc-out : succinate-in -> succinate

compartment respiration
    nuo : NADH -> QH2 + PN ATP
    cyo : QH2 + 0.5 oxygen -> PC ATP

compartment anabolism
    growth : ? G6P + 0.04 oxaloacetate + 0.04 2-oxoglutarate + ? ammonia + ? NADH + K_X ATP -> X +
            0.08 CO2

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 3 ± 1.5

variant anaerobic "no air; without it the cells do not make 2-oxoglutarate dehydrogenase"
    limit  oxygen <= 0
    drop   kgd

variant glucokinase "glucose is paid with ATP in place of PEP"
    drop  pts
    add to sugar
        glk : glucose + ATP -> G6P

variant diol "lactate and acetate closed, as in a strain made for 2,3-butanediol" from anaerobic
    limit  lactate <= 0
    limit  acetate <= 0
    limit  succinate <= 0
