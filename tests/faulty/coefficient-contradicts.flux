substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: coefficient-contradicts "? CO2"
    ferment : glucose -> 3 ethanol + ? CO2
