substrate glucose, ammonia
product   CO2
exchange  oxygen
# expect: ash-assumed "X"
biomass   X CH1.8O0.5N0.2
compartment anabolism
    growth : ? glucose + ? ammonia + 0.1 oxygen -> X + ? CO2
