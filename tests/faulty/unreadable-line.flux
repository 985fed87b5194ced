substrate glucose
product   ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
    # expect: unreadable-line "second" certain
    second    glucose -> 2 ethanol + 2 CO2
    # expect: unreadable-line "glucose"
    glucose -> 2 ethanol + 2 CO2
    # expect: unreadable-line "glucose"
    third :   glucose
    # expect: unreadable-line "->" 2
    fourth : glucose -> 2 ethanol -> 2 CO2
    # expect: unreadable-line "+"
    fifth : glucose + -> 2 ethanol + 2 CO2
    # expect: unreadable-line "2"
    sixth : 2 -> ethanol
    # expect: unreadable-line "("
    seventh : glucose -> (2*ethanol + 2 CO2
    # expect: unreadable-line "["
    eighth : glucose -> 2 ethanol[out] + 2 CO2
    # expect: unreadable-line "my reaction"
    my reaction : glucose -> 2 ethanol + 2 CO2
    # expect: unreadable-line "fructose-1,6-bisphosphate"
    ninth : fructose-1,6-bisphosphate -> 2 ethanol + 2 CO2
    # expect: unreadable-line "-"
    tenth : glucose - oxygen -> 2 ethanol
    # expect: unreadable-line "+" 2
    eleventh : glucose -> 2 ethanol + 2 CO2 +

    # expect: unreadable-line "->"
    twelfth : glucose ->

# expect: unreadable-line "other.flux" certain
use other.flux
# expect: unreadable-line ":" certain
compartment maintenance:
# expect: unreadable-line "overflow metabolism" certain
compartment overflow metabolism
variant wide
    # expect: unreadable-line "add" certain
    add catabolism
# expect: unreadable-line "of" certain
variant wider of wide
# expect: unreadable-line "has all limits lifted" certain
variant widest has all limits lifted
# expect: unreadable-line "accept unused-species"
product formate accept unused-species
# expect: unreadable-line "=" certain
product butanol = C4H10O
# expect: unreadable-line "," 2 certain
product propanol, butyrate,
# expect: unreadable-line "acetic acid" certain
product acetic acid
# expect: unreadable-line "," certain
product lactate,2,3-butanediol
# expect: unreadable-line "product"
product
