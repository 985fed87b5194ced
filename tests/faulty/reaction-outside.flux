substrate glucose
product   ethanol, CO2
# expect: reaction-outside "first"
first : glucose -> 2 ethanol + 2 CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
limit glucose <= 3
    # expect: reaction-outside "second"
    second : glucose -> 2 ethanol + 2 CO2
variant wide
    # expect: reaction-outside "third"
    third : glucose -> 2 ethanol + 2 CO2
