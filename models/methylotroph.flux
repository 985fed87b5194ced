# Organism     A methylotrophic bacterium that stores polyhydroxybutyrate, on methanol, ammonia and
#              air: with the serine cycle (as Methylobacterium or Hyphomicrobium), or, as a variant,
#              with the ribulose monophosphate cycle (as Bacillus methanolicus).
# Sources      General biochemistry, from memory.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of
#              X is one C-mol, one of polyhydroxybutyrate one unit of its chain.
# Assumptions  Methanol dehydrogenase gives its electrons to cytochrome c, too late to reduce NAD; the
#              variant nad-dehydrogenase makes NADH of them. cyt-c is a pair of them. Formaldehyde is
#              oxidised with NADP, formate with NAD; NADPH becomes NADH at no cost, but not the other
#              way. The amino group of serine and glycine is lent and left out. Glyoxylate that growth
#              draws off comes back by isocitrate lyase, which not every one of these bacteria has.
#              Pyruvate is made of PEP alone. pentose-P stands for all pentose phosphates. formate-in
#              and succinate-in are formate and succinate inside the cell. The membrane saves PN mol
#              ATP where NADH reduces the quinone, PB where the quinol reduces cytochrome c, PC where
#              that reduces oxygen.
# Fitted       Nothing. PN, PB, PC, K_X and the NADPH need of growth are usual values with wide
#              errors, from memory.

model      Methylotroph that stores polyhydroxybutyrate
basis      mmol/g/h

substrate  methanol
substrate  ammonia, oxygen
product    polyhydroxybutyrate, formate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP              carries energy
carrier    NADH             carries 2 electrons
carrier    NADPH            carries 2 electrons
carrier    QH2              carries 2 electrons
carrier    cyt-c            carries 2 electrons
inside     formaldehyde, methylene-THF
inside     glyoxylate, glycerate, 2PG, PEP, pyruvate, acetyl-CoA
inside     oxaloacetate, malate, citrate, 3-hydroxybutyryl-CoA
inside     hydroxypyruvate  C3H4O4
inside     formate-in       CH2O2
inside     succinate-in     C4H6O4

parameter  PN  = 0.6 ± 0.2  in [0, 1]    # mol ATP per NADH that reduces the quinone
parameter  PB  = 0.3 ± 0.1  in [0, 0.6]  # mol ATP per quinol that reduces cytochrome c
parameter  PC  = 0.7 ± 0.2  in [0.3, 1]  # mol ATP per pair of cytochromes that reduces oxygen
parameter  K_X = 2.3 ± 0.4  in [1, 4]    # mol ATP per C-mol of biomass, beside its precursors

compartment oxidation
    mdh-c   : methanol -> formaldehyde + cyt-c
    fal     : formaldehyde -> formate-in + NADPH
    fdh     : formate-in -> CO2 + NADH
    for-out : formate-in -> formate

compartment serine-cycle
    ftl : formate-in + ATP + NADPH -> methylene-THF
    shm : methylene-THF + glyoxylate -> hydroxypyruvate
    hpr : hydroxypyruvate + NADH -> glycerate
    gck : glycerate + ATP -> 2PG
    mtk : malate + ATP -> acetyl-CoA + glyoxylate

compartment acids
    eno : 2PG <-> PEP
    pyk : PEP -> pyruvate + ATP
    pdh : pyruvate -> acetyl-CoA + CO2 + NADH
    ppc : PEP + CO2 -> oxaloacetate
    mdh : malate <-> oxaloacetate + NADH
    cs  : acetyl-CoA + oxaloacetate -> citrate
    icl : citrate -> glyoxylate + succinate-in
    sdh : succinate-in -> malate + QH2

compartment storage
    thl : 2 acetyl-CoA + NADPH -> 3-hydroxybutyryl-CoA
    phb : 3-hydroxybutyryl-CoA -> polyhydroxybutyrate

compartment respiration
    nuo : NADH -> QH2 + PN ATP
    bc1 : QH2 -> cyt-c + PB ATP
    cox : cyt-c + 0.5 oxygen -> PC ATP
    sth : NADPH -> NADH

compartment anabolism
    growth : ? PEP + 0.1 acetyl-CoA + 0.06 oxaloacetate + ? ammonia + 0.4 NADPH + K_X ATP +
            ? NADH -> X

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 2 ± 1

variant nad-dehydrogenase "methanol oxidised with NAD"
    drop  mdh-c
    add to oxidation
        mdh-n : methanol -> formaldehyde + NADH

variant RuMP "the ribulose monophosphate cycle in place of the serine cycle"
    drop    ftl, shm, hpr, gck, mtk
    drop    methylene-THF, hydroxypyruvate, glycerate
    drop    icl, cs, sdh, mdh
    drop    glyoxylate, citrate, succinate-in, malate
    inside  F6P, T3P
    inside  pentose-P  C5H11O8P
    add to acids
        hps : formaldehyde + pentose-P -> F6P
        tkt : 2 F6P + T3P <-> 3 pentose-P
        pfk : F6P + ATP -> 2 T3P
        gap : T3P -> 2PG + ATP + NADH
