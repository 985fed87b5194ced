# Electron-limited yields from glucose without oxygen: all electrons of the
# sugar into the product, carbon made up by CO2 (released or fixed).
# Source   Computed from degrees of reduction; ethanol 0.511 g/g, isobutanol 0.41 g/g and succinate
#          1.71 mol/mol = 1.12 g/g were also read in print.
model      One line a product, glucose
basis      mmol

substrate  glucose, ammonia
product    ethanol, lactate, acetate, succinate, butyrate, butanol, propionate
product    isobutanol           C4H10O
product    2,3-butanediol       C4H10O2
product    1,3-propanediol      C3H8O2
product    citrate, glutamate, lysine
product    3-hydroxypropionate  C3H6O3
product    hydrogen, methane, glycerol, itaconate, malate, fumarate
exchange   CO2

compartment makers
    to-ethanol     : glucose -> ? ethanol + ? CO2
    to-lactate     : glucose -> ? lactate
    to-acetate     : glucose -> ? acetate
    to-succinate   : glucose + ? CO2 -> ? succinate
    to-butyrate    : glucose -> ? butyrate + ? CO2
    to-butanol     : glucose -> ? butanol + ? CO2
    to-isobutanol  : glucose -> ? isobutanol + ? CO2
    to-propionate  : glucose -> ? propionate + ? CO2
    to-butanediol  : glucose -> ? 2,3-butanediol + ? CO2
    to-propanediol : glucose -> ? 1,3-propanediol + ? CO2
    to-citrate     : glucose + ? CO2 -> ? citrate
    to-glutamate   : glucose + ? ammonia + ? CO2 -> ? glutamate
    to-lysine      : glucose + ? ammonia -> ? lysine + ? CO2
    to-3HP         : glucose -> ? 3-hydroxypropionate
    to-hydrogen    : glucose -> ? hydrogen + ? CO2
    to-methane     : glucose -> ? methane + ? CO2
    to-glycerol    : glucose -> ? glycerol + ? CO2
    to-itaconate   : glucose + ? CO2 -> ? itaconate
    to-malate      : glucose + ? CO2 -> ? malate
    to-fumarate    : glucose + ? CO2 -> ? fumarate

limit      glucose = 1
