# a statement that goes on in the next lines is told at its own line and column
substrate glucose
product   ethanol,   # the comma carries on
          CO2
compartment catabolism
    ferment : glucose ->
        2 ethanol +
        # expect: decimal-comma "2,0" certain
        2,0 CO2
