# A network of 37 balanced species to count routes in; from general biochemistry, from memory.
model   Fifty-four reactions, 75 counted one way

substrate  glucose, xylose, ammonia, oxygen
product    ethanol, lactate, acetate, formate, succinate, glycerol
product    2,3-butanediol, H2
exchange   CO2
biomass    X       CH1.8O0.5N0.2  ash 5 %

carrier    ATP     carries energy
carrier    NADH, NADPH, QH2
inside     G6P
inside     F6P
inside     FBP
inside     GAP
inside     DHAP
inside     BPG
inside     3PG
inside     2PG
inside     PEP
inside     pyr     C3H4O3
inside     acCoA   C2H2O
inside     OAA     C4H4O5
inside     cit     C6H8O7
inside     isocit  C6H8O7
inside     AKG     C5H6O5
inside     sucCoA  C4H4O3
inside     suc     C4H6O4
inside     fum     C4H4O4
inside     mal     C4H6O5
inside     glyox   C2H2O3
inside     R5P
inside     X5P
inside     S7P
inside     E4P
inside     gluconate-P  C6H12O7
inside     xylulose     C5H10O5
inside     acetolac     C5H8O4
inside     acetoin-in   C4H8O2
inside     acetal  C2H4O
inside     for     CH2O2
inside     glu     C5H9O4N
inside     NH3-in  NH3
inside     G3P     C3H8O3

parameter  PO   = 1.4
parameter  K_X  = 1.8

compartment uptake
    pts     : glucose + PEP -> G6P + pyr
    kinase  : glucose + ATP -> G6P
    xylA    : xylose + ATP -> xylulose
    xylB    : xylulose + ATP -> X5P
    amm     : ammonia -> NH3-in

compartment glycolysis
    pgi     : G6P <-> F6P
    pfk     : F6P + ATP -> FBP
    aldo    : FBP <-> GAP + DHAP
    tpi     : DHAP <-> GAP
    gapdh   : GAP <-> BPG + NADH
    pgk     : BPG <-> 3PG + ATP
    pgm     : 3PG <-> 2PG
    eno     : 2PG <-> PEP
    pyk     : PEP -> pyr + ATP
    gpd     : DHAP + NADH <-> G3P
    gpp     : G3P -> glycerol

compartment pentoses
    zwf     : G6P -> gluconate-P + NADPH
    gnd     : gluconate-P -> R5P + CO2 + NADPH
    rpe     : R5P <-> X5P
    tkt1    : R5P + X5P <-> S7P + GAP
    tal     : S7P + GAP <-> E4P + F6P
    tkt2    : X5P + E4P <-> F6P + GAP

compartment pyruvate
    pdh     : pyr -> acCoA + CO2 + NADH
    pfl     : pyr <-> acCoA + for
    ldh     : pyr + NADH <-> lactate
    als     : 2 pyr -> acetolac + CO2
    ald     : acetolac -> acetoin-in + CO2
    bdh     : acetoin-in + NADH <-> 2,3-butanediol
    pta     : acCoA -> acetate + ATP
    acald   : acCoA + NADH <-> acetal
    adh     : acetal + NADH <-> ethanol
    pdc     : pyr -> acetal + CO2
    fhl     : for -> CO2 + H2
    fout    : for -> formate

compartment cycle
    ppc     : PEP + CO2 -> OAA
    pyc     : pyr + CO2 + ATP -> OAA
    cs      : acCoA + OAA -> cit
    aco     : cit <-> isocit
    icd     : isocit <-> AKG + CO2 + NADPH
    akgdh   : AKG -> sucCoA + CO2 + NADH
    scs     : sucCoA <-> suc + ATP
    sdh     : suc -> fum + QH2
    frd     : fum + QH2 -> suc   accept parallel-reactions: two ends without a bound are measured too
    hydrat  : fum <-> mal
    mdh     : mal <-> OAA + NADH
    icl     : isocit -> glyox + suc
    ms      : glyox + acCoA -> mal
    sout    : suc -> succinate

compartment respiration
    ndh     : NADH -> QH2 + ATP
    cyo     : QH2 + 0.5 oxygen -> PO ATP
    th      : NADPH <-> NADH

compartment growth
    gdh     : AKG + NH3-in + NADPH <-> glu
    growth  : 0.02 G6P + 0.04 R5P + 0.01 GAP + 0.02 3PG + 0.01 PEP + 0.1 pyr + 0.08 acCoA + 0.04 OAA + 0.2 glu + K_X ATP + ? NADPH -> X + ? CO2 + 0.2 AKG
    upkeep  : ATP -> nothing

