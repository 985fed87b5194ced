# Organism     A facultative bacterium (as Escherichia coli) with four ways built in to
#              3-hydroxypropionate, on glucose, xylose or glycerol, with or without air.
# Sources      General biochemistry, from memory.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of
#              X is one C-mol.
# Assumptions  NADH and NADPH are two carriers; NADPH can become NADH at no cost, but not the other
#              way (the variant transhydrogenase opens it, for a quarter of an ATP: one proton of
#              four). Sugars and glycerol enter by a facilitator at no cost. Xylose is opened by the
#              isomerase; the reductase and the phosphoketolase are variants. pentose-P stands for
#              all pentose phosphates. Pyruvate dehydrogenase works without air too. The amino group
#              that beta-alanine brings along is lent: it comes back as glutamate. Glycerol
#              dehydratase works in air, and the aminomutase is as fast as it must be: neither is
#              so in practice. malonate-sa is malonate semialdehyde; glycerol-in, xylitol-in,
#              formate-in and succinate-in are those inside the cell. The export of acids costs
#              nothing.
# Fitted       Nothing. The NADPH need of growth, 0.4 mol per C-mol (about 16 mmol/g), PN, PC and
#              K_X are usual values with wide errors, from memory.

model      3-hydroxypropionate by four ways
basis      mmol/g/h

substrate  glucose, xylose, glycerol
substrate  ammonia, oxygen
product    3-hydroxypropionate, 1,3-propanediol
product    acetate, lactate, ethanol, formate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP           carries energy
carrier    NADH          carries 2 electrons
carrier    NADPH         carries 2 electrons
carrier    QH2           carries 2 electrons
inside     G6P, F6P, T3P, PEP, pyruvate, acetyl-CoA, acetyl-phosphate
inside     oxaloacetate, citrate, 2-oxoglutarate, malate
inside     xylulose
inside     pentose-P     C5H11O8P
inside     glycerol-in   C3H8O3
inside     formate-in    CH2O2
inside     succinate-in  C4H6O4
inside     malonyl-CoA, glutamate, aspartate, alanine, beta-alanine, 3-hydroxypropanal
inside     malonate-sa   C3H4O3

parameter  PN  = 0.6 ± 0.2  in [0, 1]      # mol ATP per NADH that reduces the quinone
parameter  PC  = 0.8 ± 0.2  in [0.3, 1.3]  # mol ATP per quinol that reduces oxygen
parameter  K_X = 2.1 ± 0.3  in [1, 3.5]    # mol ATP per C-mol of biomass, beside its precursors

compartment sugar
    glk : glucose + ATP -> G6P
    pgi : G6P <-> F6P
    pfk : F6P + ATP -> 2 T3P
    fbp : 2 T3P -> F6P
    gap : T3P -> PEP + NADH + ATP
    pyk : PEP -> pyruvate + ATP

compartment pentoses
    xylA : xylose -> xylulose
    xylB : xylulose + ATP -> pentose-P
    zwf  : G6P -> pentose-P + CO2 + 2 NADPH
    tkt  : 3 pentose-P <-> 2 F6P + T3P

compartment glycerol
    glpF : glycerol -> glycerol-in
    glpK : glycerol-in + ATP -> T3P + QH2
    gldA : glycerol-in + ATP -> T3P + NADH

compartment acids
    pdh : pyruvate -> acetyl-CoA + CO2 + NADH
    ppc : PEP + CO2 -> oxaloacetate
    cs  : acetyl-CoA + oxaloacetate -> citrate
    icd : citrate -> 2-oxoglutarate + CO2 + NADPH
    kgd : 2-oxoglutarate -> succinate-in + CO2 + NADH + ATP
    sdh : succinate-in -> malate + QH2
    mdh : malate <-> oxaloacetate + NADH

compartment overflow
    pfl     : pyruvate -> acetyl-CoA + formate-in
    for-out : formate-in -> formate
    pta     : acetyl-CoA <-> acetyl-phosphate
    ack     : acetyl-phosphate -> acetate + ATP
    adh     : acetyl-CoA + 2 NADH -> ethanol
    ldh     : pyruvate + NADH -> lactate

compartment by-malonyl
    acc : acetyl-CoA + CO2 + ATP -> malonyl-CoA
    mcr : malonyl-CoA + NADPH -> malonate-sa

compartment by-aspartate
    aat  : oxaloacetate + glutamate -> aspartate + 2-oxoglutarate
    panD : aspartate -> beta-alanine + CO2

compartment by-alanine
    alt : pyruvate + glutamate -> alanine + 2-oxoglutarate
    aam : alanine -> beta-alanine

compartment by-glycerol
    gpp  : T3P + NADH -> glycerol-in
    dhaB : glycerol-in -> 3-hydroxypropanal
    aldH : 3-hydroxypropanal -> 3-hydroxypropionate + NADH
    dhaT : 3-hydroxypropanal + NADH -> 1,3-propanediol

compartment last-steps
    bat : beta-alanine + 2-oxoglutarate -> malonate-sa + glutamate
    msr : malonate-sa + NADPH -> 3-hydroxypropionate

compartment respiration
    nuo : NADH -> QH2 + PN ATP
    cyo : QH2 + 0.5 oxygen -> PC ATP
    sth : NADPH -> NADH

compartment anabolism
    growth : ? G6P + 0.04 oxaloacetate + 0.04 2-oxoglutarate + 0.06 acetyl-CoA + ? ammonia +
            0.4 NADPH + K_X ATP -> X + 0.05 CO2 + ? NADH

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 3 ± 1.5

variant by-malonyl "the way by malonyl-CoA alone: two NADPH, an ATP"
    drop  aat, panD, alt, aam, bat, gpp, dhaB, aldH, dhaT
    drop  glutamate, aspartate, alanine, beta-alanine, 3-hydroxypropanal, 1,3-propanediol

variant by-aspartate "the way by aspartate alone: one NADPH, a PEP"
    drop  acc, mcr, alt, aam, gpp, dhaB, aldH, dhaT
    drop  malonyl-CoA, alanine, 3-hydroxypropanal, 1,3-propanediol

variant by-alanine "the way by alanine and an aminomutase alone: one NADPH"
    drop  acc, mcr, aat, panD, gpp, dhaB, aldH, dhaT
    drop  malonyl-CoA, aspartate, 3-hydroxypropanal, 1,3-propanediol

variant by-glycerol "the way by glycerol alone: it returns its NADH and loses a phosphate"
    drop  acc, mcr, aat, panD, alt, aam, bat, msr
    drop  malonyl-CoA, glutamate, aspartate, alanine, beta-alanine, malonate-sa

variant anaerobic "no air; without it the citric acid cycle stays open"
    limit  oxygen <= 0
    drop   kgd, sdh, mdh, succinate-in, malate

variant reductase "xylose by a reductase that takes NADPH and a dehydrogenase that makes NADH"
    drop  xylA
    add to pentoses
        xylR : xylose + NADPH -> xylitol-in
        xylD : xylitol-in -> xylulose + NADH
        xylT : xylitol-in -> xylitol
    inside   xylitol-in  C5H12O5
    product  xylitol

variant phosphoketolase "pentose phosphate split into acetyl phosphate and triose: no carbon lost"
    add to pentoses
        xpk : pentose-P -> T3P + acetyl-phosphate

variant transhydrogenase "NADH becomes NADPH for a proton of the membrane"
    add to respiration
        pnt : NADH + 0.25 ATP -> NADPH
