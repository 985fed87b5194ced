substrate glucose
product   ethanol, CO2, formate
carrier   NADH carries 2 electrons
compartment catabolism
    # expect: coefficient-zero "? NADH"
    ferment : glucose -> 2 ethanol + 2 CO2 + ? NADH
    hydro   : formate -> CO2 + NADH
