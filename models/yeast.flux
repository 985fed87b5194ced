# Organism     Baker's yeast (Saccharomyces cerevisiae) on glucose, ammonia and air; with the variant
#              anaerobic also without air, with two others on xylose.
# Sources      General biochemistry, from memory. The biomass formula is the usual mean of textbooks.
#              NADPH need of growth: 0.19 mol per C-mol, about 8 mmol/g (6.6 to 9.4 mmol/g are quoted
#              for yeasts; from memory).
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of X
#              is one C-mol.
# Assumptions  Two places: NADH is that of the cytosol, NADH-mit that of the mitochondria. Neither
#              passes the inner membrane; each has a dehydrogenase of its own, and none of the two
#              pumps protons, so one P/O ratio serves both. NADPH comes from the pentose phosphate
#              way and from the oxidation of acetaldehyde. Without air the mitochondrial NADH leaves
#              by the shuttle of ethanol and acetaldehyde, and glycerol takes up what growth leaves.
#              Succinate could do the same and save ATP; that cells make little of it is regulation,
#              which a list of reactions does not know: measure it, or limit it. Upkeep is a least
#              value only: with sugar in excess yeast makes more ATP than growth accounts for, and
#              wastes it; the variant sugar-limited makes it a measured value. pyruvate-in and
#              succinate-in are pyruvate and succinate inside the cell. Transport costs nothing but
#              what is written.
# Fitted       The NADPH need and the share of the precursors, so that growth without air leaves
#              0.19 mol NADH per C-mol (a glycerol of 0.077 C-mol per 0.137 C-mol of biomass);
#              K_X, so that the same yields hold with an upkeep of 1 mmol/g/h at 0.3 1/h.
#              PO is a usual value with a wide error, not a fit.

model      Baker's yeast, aerobic and anaerobic
basis      mmol/g/h

substrate  glucose
substrate  ammonia, oxygen
product    ethanol, glycerol, acetate, pyruvate, succinate
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 8 %

carrier    ATP           carries energy
carrier    NADH          carries 2 electrons  # cytosol
carrier    NADH-mit      carries 2 electrons  # mitochondria
carrier    NADPH         carries 2 electrons
carrier    QH2           carries 2 electrons  # ubiquinol
inside     G6P, T3P, acetaldehyde, acetyl-CoA, citrate, 2-oxoglutarate, malate, oxaloacetate
inside     pentose-P     C5H11O8P             # the pentose phosphates as one
inside     pyruvate-in   C3H4O3
inside     acetyl-cyt    C2H2O                # acetyl-CoA of the cytosol
inside     succinate-in  C4H6O4

parameter  PO  = 1.0 ± 0.2  in [0.4, 1.6]    # mol ATP per atom of oxygen
parameter  K_X = 1.45 ± 0.25  in [0.8, 2.5]  # mol ATP per C-mol of biomass, beside its precursors

compartment sugar
    hxk   : glucose + ATP -> G6P
    pfk   : G6P + ATP -> 2 T3P
    lower : T3P -> pyruvate-in + 2 ATP + NADH
    gpd   : T3P + NADH -> glycerol
    zwf   : G6P -> pentose-P + CO2 + 2 NADPH
    tkt   : 3 pentose-P <-> 2 G6P + T3P

compartment fermentation
    pdc     : pyruvate-in -> acetaldehyde + CO2
    adh     : acetaldehyde + NADH -> ethanol
    ald     : acetaldehyde -> acetate + NADPH
    pyr-out : pyruvate-in -> pyruvate

compartment mitochondria
    pdh     : pyruvate-in -> acetyl-CoA + CO2 + NADH-mit
    cs      : acetyl-CoA + oxaloacetate -> citrate
    idh     : citrate -> 2-oxoglutarate + CO2 + NADH-mit
    kgd     : 2-oxoglutarate -> succinate-in + CO2 + NADH-mit + ATP
    sdh     : succinate-in -> malate + QH2
    mdh     : malate <-> oxaloacetate + NADH-mit
    pyc     : pyruvate-in + CO2 + ATP -> oxaloacetate
    suc-out : succinate-in -> succinate

compartment respiration
    nde    : NADH -> QH2      # from the cytosol's side
    ndi    : NADH-mit -> QH2  # from the inner side
    oxphos : QH2 + 0.5 oxygen -> PO ATP

compartment anabolism
    acs    : acetaldehyde + 2 ATP -> acetyl-cyt + NADPH
    growth : ? G6P + 0.04 acetyl-cyt + 0.03 2-oxoglutarate + ? ammonia + 0.19 NADPH + K_X ATP ->
            X + ? NADH

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep >= 1

variant anaerobic "no air: the mitochondrial NADH leaves by a shuttle, succinate by its reductive branch"
    limit  oxygen <= 0
    add to mitochondria
        shuttle : NADH-mit <-> NADH
        frd     : malate + NADH-mit -> succinate-in

variant sugar-limited "as in a chemostat: no ATP is wasted, so that upkeep is a measured value"
    limit  upkeep = 1.0 ± 0.5

variant acetate-nadh "acetate beyond what NADPH is needed for, by the mitochondrial enzyme"
    add to fermentation
        ald-mit : acetaldehyde -> acetate + NADH-mit

variant no-glycerol "without the redox valve growth stops: for trying out conflicts" from anaerobic
    limit  glycerol <= 0
    limit  succinate <= 0

variant xylose-isomerase "xylose by way of an isomerase: no redox carrier takes part"
    substrate  xylose
    inside     xylulose
    add to sugar
        xi  : xylose -> xylulose
        xks : xylulose + ATP -> pentose-P

variant xylose-reductase "xylose by way of xylitol: each turns an NADPH into an NADH"
    substrate  xylose
    product    xylitol
    inside     xylulose
    inside     xylitol-in  C5H12O5
    add to sugar
        xr      : xylose + NADPH -> xylitol-in
        xdh     : xylitol-in -> xylulose + NADH
        xit-out : xylitol-in -> xylitol
        xks     : xylulose + ATP -> pentose-P
