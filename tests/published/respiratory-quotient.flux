# Growth on hexadecane at a measured respiratory quotient of 0.43.
# Source   Doran, Bioprocess Engineering Principles, example 4.7: O2 12.5, NH3 2.13, X 10.6, CO2
#          5.37, H2O 11.4 (from memory, 92 %), and computed.
model      Growth on hexadecane, respiratory quotient given
basis      mmol

substrate  ammonia, oxygen
substrate  hexadecane  C16H34
product    CO2
biomass    X           CH1.66O0.27N0.20

compartment growth
    cells : hexadecane + ? oxygen + ? ammonia -> ? X
    burn  : hexadecane + ? oxygen -> ? CO2

limit      hexadecane = 1
limit      CO2 / oxygen = 0.43
