substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: accept-unknown "dead-ends"
    ferment : glucose -> 2 ethanol + 2 CO2 accept dead-ends: it is meant
    # expect: accept-unknown "unbalanced-line"
    # expect: unbalanced-line "3 CO2"
    second  : glucose -> 2 ethanol + 3 CO2 accept unbalanced-line: it is meant
