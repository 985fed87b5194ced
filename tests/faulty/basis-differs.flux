use "used/volumetric.flux"
substrate glucose
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
