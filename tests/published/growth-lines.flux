# Aerobic growth with two thirds of the carbon in the cells.
# Source   Shuler & Kargi, Bioprocess Engineering, example 7.1. Glucose: the numbers 0.909, 3.85, 2
#          and 1.47 were read in print. Hexadecane: from memory
#          (90 %), and computed.
model      Growth on glucose and on hexadecane
basis      mmol

substrate  glucose, ammonia, oxygen
substrate  hexadecane  C16H34
product    CO2
biomass    X           C4.4H7.3N0.86O1.2

compartment growth
    on-glucose    : glucose + ? oxygen + ? ammonia -> (2/3*6/4.4) X + ? CO2
    on-hexadecane : hexadecane + ? oxygen + ? ammonia -> (2/3*16/4.4) X + ? CO2
