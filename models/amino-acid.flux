# Organism     An aerobic producer of lysine (as Corynebacterium glutamicum) on glucose and ammonia.
# Sources      General biochemistry, from memory.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of X
#              is one C-mol.
# Assumptions  NADH and NADPH are two carriers that nothing exchanges (variants open a way).
#              Isocitrate dehydrogenase makes NADPH. The first dehydrogenase of respiration takes
#              NADH and NADPH and pumps no protons: one P/O ratio serves all. The last steps of
#              lysine go by the dehydrogenase; the succinylase is a variant. Carbon for oxaloacetate
#              is fixed on pyruvate. Glucose enters by the phosphotransferase system, which pays
#              with PEP. Ru5P stands for all pentose phosphates. mesoDAP is diaminopimelate, THDP its
#              cyclic precursor, ASA aspartate semialdehyde; lysine-in and succinate-in are lysine
#              and succinate inside the cell. The export of lysine costs nothing.
# Fitted       Nothing. The NADPH need of growth, 0.4 mol per C-mol (about 16 mmol/g), the PO and the
#              K_X are usual values, from memory; PO and K_X have wide errors.

model      Aerobic lysine producer
basis      mmol/g/h

substrate  glucose
substrate  ammonia, oxygen
product    lysine, acetate, lactate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP           carries energy
carrier    NADH          carries 2 electrons
carrier    NADPH         carries 2 electrons
carrier    QH2           carries 2 electrons
inside     G6P, F6P, T3P, 6PG, Ru5P, S7P, E4P
inside     3PG, PEP, pyruvate, acetyl-CoA
inside     citrate, 2-oxoglutarate, succinyl-CoA, malate, oxaloacetate
inside     glutamate, aspartate
inside     succinate-in  C4H6O4
inside     ASA           C4H7NO3
inside     THDP          C7H9NO4
inside     mesoDAP       C7H14N2O4
inside     lysine-in     C6H14N2O2

parameter  PO  = 1.3 ± 0.3  in [0.5, 2]  # mol ATP per atom of oxygen
parameter  K_X = 2.0 ± 0.4  in [1, 4]    # mol ATP per C-mol of biomass, beside its precursors

compartment sugar
    pts : glucose + PEP -> G6P + pyruvate
    pgi : G6P <-> F6P
    pfk : F6P + ATP -> 2 T3P
    gap : T3P -> 3PG + ATP + NADH
    eno : 3PG -> PEP
    pyk : PEP -> pyruvate + ATP

compartment pentoses
    zwf  : G6P -> 6PG + NADPH
    gnd  : 6PG -> Ru5P + CO2 + NADPH
    tkt1 : 2 Ru5P <-> S7P + T3P
    tal  : S7P + T3P <-> F6P + E4P
    tkt2 : Ru5P + E4P <-> F6P + T3P

compartment acids
    pdh : pyruvate -> acetyl-CoA + CO2 + NADH
    cs  : acetyl-CoA + oxaloacetate -> citrate
    icd : citrate -> 2-oxoglutarate + CO2 + NADPH
    kgd : 2-oxoglutarate -> succinyl-CoA + CO2 + NADH
    scs : succinyl-CoA <-> succinate-in + ATP
    sdh : succinate-in -> malate + QH2
    mdh : malate <-> oxaloacetate + NADH
    pyc : pyruvate + CO2 + ATP -> oxaloacetate

compartment lysine-way
    gdh  : 2-oxoglutarate + ammonia + NADPH -> glutamate
    asat : oxaloacetate + glutamate -> aspartate + 2-oxoglutarate
    ask  : aspartate + ATP + NADPH -> ASA
    dap  : ASA + pyruvate + NADPH -> THDP
    ddh  : THDP + ammonia + NADPH -> mesoDAP
    lysA : mesoDAP -> lysine-in + CO2
    lysE : lysine-in -> lysine

compartment overflow
    ack : acetyl-CoA -> acetate + ATP
    ldh : pyruvate + NADH -> lactate

compartment respiration
    ndh : NADH -> QH2
    ndp : NADPH -> QH2
    cyo : QH2 + 0.5 oxygen -> PO ATP

compartment anabolism
    growth : ? G6P + 0.02 Ru5P + 0.03 3PG + 0.04 pyruvate + 0.06 acetyl-CoA + 0.03 oxaloacetate +
            0.04 glutamate + ? ammonia + 0.4 NADPH + K_X ATP -> X + 0.05 CO2 + ? NADH

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 2 ± 1

variant transhydrogenase "the two redox carriers are exchanged at no cost"
    add to pentoses
        pnt : NADH <-> NADPH

variant malic-enzyme "pyruvate, oxaloacetate and malate in a circle: NADH becomes NADPH for one ATP"
    add to acids
        mae : malate -> pyruvate + CO2 + NADPH

variant gapN "an enzyme that makes NADPH in place of NADH and ATP in glycolysis"
    add to sugar
        gapN : T3P -> 3PG + NADPH

variant succinylase "the other way to diaminopimelate: it lends a succinyl group, which costs one ATP"
    drop  ddh
    add to lysine-way
        dapC : THDP + succinyl-CoA + glutamate -> mesoDAP + succinate-in + 2-oxoglutarate
