# expect: use-outside "../../models/yeast.flux"
use "../../models/yeast.flux"
# expect: use-outside "/somewhere/else.flux"
use "/somewhere/else.flux"
substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
