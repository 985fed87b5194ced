substrate glucose
product   ethanol, CO2
inside    pyruvate
carrier   NADH carries 2 electrons
compartment catabolism
    # expect: unknown-species "pyruvat"
    upper   : glucose -> 2 pyruvat + 2 NADH
    lower   : pyruvat + NADH -> ethanol + CO2
    # expect: unknown-species "EtOH"
    third   : EtOH -> ethanol
    # expect: unknown-species "malate"
    fourth  : malate -> pyruvate + CO2 + NADH
    fifth   : pyruvate + NADH -> ethanol + CO2
    # expect: unknown-species "fifth"
    sixth   : glucose -> fifth
# expect: unknown-species "sulphide-x"
free sulphide-x
