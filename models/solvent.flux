# Organism     A solvent-forming anaerobe (as Clostridium acetobutylicum); with the variant
#              no-solvents a butyrate former.
# Sources      General biochemistry, from memory.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of X
#              is one C-mol.
# Assumptions  Fd is a pair of reduced ferredoxins: two electrons. They pass to NADH, but not back:
#              NADH gives hydrogen only together with Fd, and crotonyl-CoA takes two NADH of which
#              one comes out as Fd. No energy is saved at the membrane. The acids are released, and
#              acetone takes its acetate from those made at the same time; with the variant
#              acids-fed they are taken up from the medium too. Lactate is oxidised with the help of
#              Fd, since NAD alone would not take its electrons. Glucose enters by the
#              phosphotransferase system, which pays with PEP. NADPH counts as NADH.
# Fitted       Nothing. K_X is rounded down from the classical mean of 10.5 g of cells per mol ATP,
#              2.55 mol per C-mol, which counts upkeep as well; its error is wide.

model      Solvent-forming anaerobe
basis      mmol/g/h

substrate  glucose
substrate  ammonia
product    butanol, acetone, ethanol, hydrogen, formate
exchange   acetate, butyrate, lactate, CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP   carries energy
carrier    NADH  carries 2 electrons
carrier    Fd    carries 2 electrons
inside     G6P, T3P, PEP, pyruvate, acetyl-CoA, acetoacetate
inside     acetoacetyl-CoA, crotonyl-CoA, butyryl-CoA

parameter  K_X = 2.3 ± 0.4  in [1, 4]  # mol ATP per C-mol of biomass

compartment sugar
    pts  : glucose + PEP -> G6P + pyruvate
    pfk  : G6P + ATP -> 2 T3P
    gap  : T3P -> PEP + NADH + ATP
    pyk  : PEP -> pyruvate + ATP
    pfor : pyruvate -> acetyl-CoA + CO2 + Fd
    pfl  : pyruvate -> acetyl-CoA + formate
    ldh  : pyruvate + NADH -> lactate

compartment electrons
    hyd : Fd -> hydrogen
    hyn : Fd + NADH -> 2 hydrogen
    fnr : Fd -> NADH

compartment acids
    ack : acetyl-CoA <-> acetate + ATP
    thl : 2 acetyl-CoA -> acetoacetyl-CoA
    hbd : acetoacetyl-CoA + NADH -> crotonyl-CoA
    bcd : crotonyl-CoA + 2 NADH -> butyryl-CoA + Fd
    buk : butyryl-CoA <-> butyrate + ATP

compartment solvents
    ctf-ac : acetate + acetoacetyl-CoA -> acetoacetate + acetyl-CoA
    ctf-bu : butyrate + acetoacetyl-CoA -> acetoacetate + butyryl-CoA
    adc    : acetoacetate -> acetone + CO2
    bdh    : butyryl-CoA + 2 NADH -> butanol
    adh    : acetyl-CoA + 2 NADH -> ethanol

compartment anabolism
    growth : ? G6P + 0.1 acetyl-CoA + ? ammonia + K_X ATP + ? NADH -> X + 0.02 CO2

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 2 ± 1
limit      acetate in <= 0
limit      butyrate in <= 0
limit      lactate in <= 0

variant acids-fed "acids are taken up as well as released"
    drop  limit acetate in
    drop  limit butyrate in
    drop  limit lactate in
    add to electrons
        lox : lactate + Fd -> pyruvate + 2 NADH

variant no-solvents "a butyrate former"
    limit  butanol <= 0
    limit  acetone <= 0
    limit  ethanol <= 0

variant no-hydrogen "hydrogenase lost, or blocked by carbon monoxide"
    limit  hydrogen <= 0
