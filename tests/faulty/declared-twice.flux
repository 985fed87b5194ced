model One
# expect: declared-twice "model Two"
model Two
substrate glucose
product   ethanol, CO2
# expect: declared-twice "ethanol"
exchange  ethanol
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: declared-twice "ferment"
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: declared-twice "glucose"
    glucose : glucose -> 2 ethanol + 2 CO2
variant slow
    limit glucose <= 1
# expect: declared-twice "slow"
variant slow
    limit glucose <= 2
