# a fault in a used file is told there
use "used/faulty.flux"
substrate glucose
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
