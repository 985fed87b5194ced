# Succinate from glucose without air in four networks.
# Source   "Improved succinate production by metabolic engineering", BioMed Res Int 2013:538790,
#          table 2 (read in print): 1, 1.33, 1.2 and 1.71 mol/mol; the exact
#          values were computed again from the lumped network below.
model      Succinate without air
basis      mmol

substrate  glucose
product    succinate, acetate, ethanol, lactate, formate
exchange   CO2
carrier    ATP         carries energy
carrier    NADH        carries 2 electrons
inside     G6P, PEP, pyruvate, acetyl-CoA, oxaloacetate, malate
inside     T3P
inside     formate-in  CH2O2

compartment catabolism
    upt_pts : glucose + PEP -> G6P + pyruvate
    upt_glk : glucose + ATP -> G6P
    glyc    : G6P + ATP -> 2 T3P
    gap     : T3P -> PEP + NADH + ATP
    pyk     : PEP -> pyruvate + ATP
    ppc     : PEP + CO2 -> oxaloacetate
    mdh     : oxaloacetate + NADH <-> malate
    frd     : malate + NADH -> succinate
    pdh     : pyruvate -> acetyl-CoA + CO2 + NADH
    pfl     : pyruvate -> acetyl-CoA + formate-in
    fdh     : formate-in -> CO2 + NADH
    for-out : formate-in -> formate
    glx     : 2 acetyl-CoA + oxaloacetate -> succinate + malate
    ack     : acetyl-CoA -> acetate + ATP
    adh     : acetyl-CoA + 2 NADH -> ethanol
    ldh     : pyruvate + NADH -> lactate

compartment maintenance
    upkeep : ATP -> nothing

limit      glucose = 1

variant dehydrogenase-only "acetyl-CoA comes only from pyruvate dehydrogenase"
    drop  pfl, fdh, for-out
    drop  formate-in, formate
variant pts from dehydrogenase-only
    drop  upt_glk
variant glk from dehydrogenase-only
    drop  upt_pts
variant reductive "no glyoxylate way"
    drop  glx
