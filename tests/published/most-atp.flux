# The most ATP per glucose, with and without oxygen.
# Source   With oxygen: 38 and 30 to 32 are textbook values (from memory, 99 %); the others were computed.
#          Without: "4 mol H2 per mol glucose" was read in Bielen et al. 2013, Life 3:52,
#          abstract; the others were computed.
model      ATP from glucose
basis      mmol

substrate  glucose, oxygen
product    lactate, ethanol, acetate, butyrate, hydrogen, formate
exchange   CO2
carrier    ATP           carries energy
carrier    NADH          carries 2 electrons
carrier    FADH          carries 2 electrons
inside     G6P, PEP, pyruvate, acetaldehyde, acetyl-CoA
inside     citrate, 2-oxoglutarate, oxaloacetate, malate
inside     T3P
inside     succinate-in  C4H6O4
inside     formate-in    CH2O2

parameter  P1 = 3
parameter  P2 = 2

compartment sugar
    glk  : glucose + ATP -> G6P
    glyc : G6P + ATP -> 2 T3P
    gap  : T3P -> PEP + NADH + ATP
    pyk  : PEP -> pyruvate + ATP

compartment fermentation
    ldh     : pyruvate + NADH -> lactate
    pdc     : pyruvate -> acetaldehyde + CO2
    adh     : acetaldehyde + NADH -> ethanol
    pdh     : pyruvate -> acetyl-CoA + CO2 + NADH
    pfl     : pyruvate -> acetyl-CoA + formate-in
    for-out : formate-in -> formate
    fhl     : formate-in -> hydrogen + CO2
    hyd     : NADH -> hydrogen
    ack     : acetyl-CoA -> acetate + ATP
    but     : 2 acetyl-CoA + 2 NADH -> butyrate + ATP

compartment cycle
    cs  : acetyl-CoA + oxaloacetate -> citrate
    icd : citrate -> 2-oxoglutarate + CO2 + NADH
    kgd : 2-oxoglutarate -> succinate-in + CO2 + NADH + ATP
    sdh : succinate-in -> malate + FADH
    mdh : malate <-> oxaloacetate + NADH

compartment respiration
    rN : NADH + 0.5 oxygen -> P1 ATP
    rF : FADH + 0.5 oxygen -> P2 ATP

compartment maintenance
    upkeep : ATP -> nothing

limit      glucose = 1

variant usual "P/O ratios of 2.5 and 1.5"
    set  P1 = 2.5
    set  P2 = 1.5
variant low "P/O ratios of 1 and 1"
    set  P1 = 1
    set  P2 = 1

variant no-oxygen
    limit  oxygen <= 0
variant no-hydrogen
    limit  hydrogen <= 0
variant lactate-only from no-oxygen
    drop  pdc, adh, pdh, pfl, for-out, fhl, hyd, ack, but
    drop  ethanol, acetate, butyrate, hydrogen, formate, acetaldehyde, formate-in
variant ethanol-only from no-oxygen
    drop  ldh, pdh, pfl, for-out, fhl, hyd, ack, but
    drop  lactate, acetate, butyrate, hydrogen, formate, formate-in
variant butyrate-only from no-oxygen
    drop  ldh, pdc, adh, ack
    drop  lactate, ethanol, acetate, acetaldehyde
