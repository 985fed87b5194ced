# Glycolysis and the pentose phosphate pathway as in Schuster, Fell & Dandekar 2000, Nature
# Biotechnology 18:326. The list of reactions and the number of modes are from memory of the paper;
# its abstract was read, and the seven modes were found by exhaustive search.
model     Glycolysis and the pentose phosphate pathway
basis     mmol

substrate G6P
product   pyruvate, CO2
product   ribose-5P  C5H11O8P
carrier   ATP       carries energy
carrier   NADH, NADPH
inside    F6P, FBP, GAP, DHAP, BPG, 3PG, 2PG, PEP
inside    6PGL, 6PG, Ru5P, R5P, Xu5P, S7P, E4P

compartment glycolysis
    pgi    : G6P <-> F6P
    pfk    : F6P + ATP -> FBP
    fbpase : FBP -> F6P
    ald    : FBP <-> GAP + DHAP
    tpi    : GAP <-> DHAP
    gapdh  : GAP <-> BPG + NADH
    pgk    : BPG <-> 3PG + ATP
    pgm    : 3PG <-> 2PG
    eno    : 2PG <-> PEP
    pyk    : PEP -> pyruvate + ATP

compartment pentoses
    g6pdh  : G6P -> 6PGL + NADPH
    pgl    : 6PGL -> 6PG
    gnd    : 6PG -> Ru5P + CO2 + NADPH
    rpi    : Ru5P <-> R5P
    rpe    : Ru5P <-> Xu5P
    tk1    : R5P + Xu5P <-> GAP + S7P
    ta     : GAP + S7P <-> F6P + E4P
    tk2    : Xu5P + E4P <-> F6P + GAP
    drain  : R5P -> ribose-5P
