substrate glucose
product   ethanol, CO2
biomass   X CH2O ash 0 %
inside    pool, store
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
compartment anabolism
    feed    : glucose -> 6 pool
    # expect: biomass-from-nothing "growth"
    growth  : pool -> X
    keep    : pool -> 2 store
    give    : store -> pool
