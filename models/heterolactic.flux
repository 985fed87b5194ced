# Organism     A heterofermentative lactic acid bacterium (as Leuconostoc or a heterofermentative
#              Lactobacillus) on glucose, fructose or xylose in a rich medium.
# Sources      General biochemistry, from memory: the phosphoketolase way; mannitol from fructose.
# Units        Rates in mmol per gram of dry weight and hour (ash included), mu in 1/h. One mole of X
#              and one of the medium's amino acids is one C-mol.
# Assumptions  NADH and NADPH are one carrier. Hexose phosphates are one pool (hexose-P). The acetyl
#              group of acetyl phosphate is a carrier that carries C2H2O. Cells take their nitrogen
#              from the amino acids of the medium (CH1.9O0.55N0.27, about a casein hydrolysate) and
#              only the rest of their carbon from sugar. Sugars enter with ions at no cost.
#              The release of lactate saves no energy.
# Fitted       Nothing. K_X is rounded down from the classical mean of 10.5 g of cells per mol ATP,
#              2.55 mol per C-mol, which counts upkeep as well; its error is wide.
#              It holds only while the medium brings the amino acids.

model      Heterofermentative lactic acid bacterium
basis      mmol/g/h

substrate  glucose, fructose, xylose
substrate  amino-acids  CH1.9O0.55N0.27
product    lactate, ethanol, acetate, mannitol, erythritol, glycerol, acetoin
exchange   CO2
biomass    X            CH1.8O0.5N0.2  ash 8 %

carrier    ATP        carries energy
carrier    NADH       carries 2 electrons
carrier    acetylP    carries C2H2O
inside     pyruvate, T3P
inside     hexose-P   C6H13O9P
inside     pentose-P  C5H11O8P
inside     tetrose-P  C4H9O7P

parameter  K_X = 2.3 ± 0.4  in [1, 4]  # mol ATP per C-mol of biomass

compartment sugar
    glk   : glucose + ATP -> hexose-P
    frk   : fructose + ATP -> hexose-P
    xyk   : xylose + ATP -> pentose-P
    zwf   : hexose-P -> pentose-P + CO2 + 2 NADH
    xpk   : pentose-P -> T3P + acetylP
    fpk   : hexose-P -> tetrose-P + acetylP
    lower : T3P -> pyruvate + 2 ATP + NADH

compartment products
    ldh : pyruvate + NADH -> lactate
    als : 2 pyruvate -> acetoin + 2 CO2
    ack : acetylP -> acetate + ATP

compartment sinks
    adh  : acetylP + 2 NADH -> ethanol
    mtd  : fructose + NADH -> mannitol
    eryt : tetrose-P + NADH -> erythritol
    gpd  : T3P + NADH -> glycerol

compartment anabolism
    growth : ? hexose-P + ? amino-acids + ? NADH + K_X ATP -> X

compartment maintenance
    upkeep : ATP -> nothing

limit      upkeep = 1.5 ± 0.7

variant aerated "an NADH oxidase that saves no energy: oxygen as the electron sink"
    substrate  oxygen
    add to sinks
        nox : 2 NADH + oxygen -> nothing

variant no-sinks "neither alcohols nor polyols"
    drop  adh, mtd, eryt, gpd, fpk
    drop  ethanol, mannitol, erythritol, glycerol, tetrose-P
