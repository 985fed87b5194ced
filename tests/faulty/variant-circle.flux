substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
# expect: variant-circle "second"
variant first from second
    limit glucose <= 1
variant second from third
    limit glucose <= 2
variant third from first
    limit glucose <= 3
