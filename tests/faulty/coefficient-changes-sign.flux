substrate glucose
product   ethanol, CO2
parameter a = 1 in [0, 4]
compartment catabolism
    # expect: coefficient-changes-sign "(3 - a) glucose"
    # expect: coefficient-changes-sign "? ethanol"
    # expect: coefficient-changes-sign "(6 - 2*a) CO2"
    ferment : (3 - a) glucose -> ? ethanol + (6 - 2*a) CO2
