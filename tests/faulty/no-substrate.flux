# expect: no-substrate "oxygen"
substrate oxygen
product   glucose, ethanol
exchange  CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    respire : ethanol + 3 oxygen -> 2 CO2
