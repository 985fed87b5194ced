substrate glucose, ammonia
product   CO2
exchange  oxygen
# expect: bad-ash "8" 2 certain
biomass   X CH1.8O0.5N0.2 ash 8
# expect: bad-ash "120"
biomass   Y CH1.8O0.5N0.2 ash 120 %
# expect: bad-ash "ash little"
biomass   Z CH1.8O0.5N0.2 ash little
compartment anabolism
    growth : ? glucose + ? ammonia + 0.1 oxygen -> X + ? CO2
