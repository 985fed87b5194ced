substrate glucose
product   ethanol, CO2
carrier   NADH carries 2 electrons
# expect: implied-composition "middle"
inside    middle
compartment catabolism
    upper : glucose -> 2 middle + 2 NADH
    lower : middle + NADH -> ethanol + CO2
