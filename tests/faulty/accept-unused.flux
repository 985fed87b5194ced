substrate glucose
# expect: accept-unused "dead-end"
product   ethanol, CO2    accept dead-end: it was mended long ago
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
