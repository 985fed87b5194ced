balance phosphate
substrate glucose
product   ethanol, CO2
exchange  phosphate
# expect: bad-cargo "energy" certain
carrier   ATP carries energy
compartment catabolism
    ferment : glucose + 2 phosphate -> 2 ethanol + 2 CO2 + 2 ATP
    upkeep  : ATP -> phosphate
