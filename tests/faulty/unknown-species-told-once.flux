# the declaration that was refused is the one cause: its species make no second error
substrate glucose
# expect: unreadable-line "acetic acid" certain
product   ethanol, acetic acid, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
limit ethanol <= 3
limit CO2 <= 4
