# expect: use-missing "used/catabolsm.flux"
use "used/catabolsm.flux"
substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
