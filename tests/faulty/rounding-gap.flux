substrate glucose, ammonia
product   CO2
exchange  oxygen
biomass   X CH1.8O0.5N0.2 ash 8 %
compartment anabolism
    # expect: rounding-gap "0.21 glucose"
    growth : 0.21 glucose + 0.2 ammonia + 0.15 oxygen -> X + 0.2 CO2
