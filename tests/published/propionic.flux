# The propionic fermentation by the way of succinate (randomising route):
#     3 glucose -> 4 propionate + 2 acetate + 2 CO2   12 ATP
#     3 lactate -> 2 propionate +   acetate +   CO2    1 ATP
# Source   Stoichiometry and ATP as printed in textbooks (read in print; the
#          network here is general biochemistry, from memory). The two printed ATP figures rest on
#          different assumptions: 12 needs one ATP per fumarate reduced, 1 needs none (computed).
model      Propionic fermentation
basis      mmol

substrate  glucose, lactate
product    propionate, acetate
exchange   CO2
carrier    ATP                carries energy
carrier    NADH               carries 2 electrons
inside     pyruvate, acetyl-CoA, oxaloacetate, malate, fumarate, succinyl-CoA
inside     methylmalonyl-CoA  C4H4O3  # bound to coenzyme A, as the next
inside     propionyl-CoA      C3H4O
inside     succinate-in       C4H6O4

compartment catabolism
    glyc : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    ldh  : lactate -> pyruvate + NADH
    pdh  : pyruvate -> acetyl-CoA + CO2 + NADH
    ack  : acetyl-CoA -> acetate + ATP
    tc   : methylmalonyl-CoA + pyruvate -> propionyl-CoA + oxaloacetate
    mdh  : oxaloacetate + NADH <-> malate
    fum  : malate <-> fumarate
    frd  : fumarate + NADH -> succinate-in + ATP
    ctf  : succinate-in + propionyl-CoA -> succinyl-CoA + propionate
    mut  : succinyl-CoA <-> methylmalonyl-CoA

compartment maintenance
    upkeep : ATP -> nothing

variant uncoupled "reducing fumarate saves no ATP"
    drop  frd
    add to catabolism
        frd0 : fumarate + NADH -> succinate-in
