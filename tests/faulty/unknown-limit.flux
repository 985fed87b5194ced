substrate glucose
product   ethanol, CO2
inside    pyruvate
carrier   NADH carries 2 electrons
compartment catabolism
    upper : glucose -> 2 pyruvate + 2 NADH
    lower : pyruvate + NADH -> ethanol + CO2
# expect: unknown-limit "glucos"
limit glucos <= 3
# expect: unknown-limit "pyruvate"
limit pyruvate <= 3
# expect: unknown-limit "oxygen"
limit CO2 / oxygen = 1.05
