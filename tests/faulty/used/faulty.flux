product ethanol
# expect: unknown-statement "prodct" certain
prodct CO2
