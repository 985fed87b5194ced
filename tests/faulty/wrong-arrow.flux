substrate glucose
product   ethanol, CO2
compartment catabolism
    # expect: wrong-arrow "=>" certain
    first  : glucose => 2 ethanol + 2 CO2
    # expect: wrong-arrow "<=>" certain
    second : glucose <=> 2 ethanol + 2 CO2
    # expect: wrong-arrow "-->" certain
    third  : glucose --> 2 ethanol + 2 CO2
    # expect: wrong-arrow "↔" certain
    fourth : glucose ↔ 2 ethanol + 2 CO2
    # expect: wrong-arrow "="
    fifth  : glucose = 2 ethanol + 2 CO2
    # expect: wrong-arrow "<-"
    sixth  : 2 ethanol + 2 CO2 <- glucose
    # expect: wrong-arrow "- >" certain
    last   : glucose - > 2 ethanol + 2 CO2
    # expect: wrong-arrow "-" 2
    no-one : glucose - 2 ethanol
