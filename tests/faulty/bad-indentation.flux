substrate glucose
product   ethanol, CO2
    # expect: bad-indentation "exchange oxygen"
    exchange oxygen
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
      # expect: bad-indentation "again : glucose -> 2 ethanol + 2 CO2"
      again : glucose -> 2 ethanol + 2 CO2
    # expect: bad-indentation "limit glucose <= 3"
    limit glucose <= 3
# expect: bad-indentation "drop again"
drop again
