substrate glucose
product   lactate
inside    pool, store
compartment catabolism
    feed    : glucose -> 2 pool
    # expect: product-from-nothing "ferment"
    ferment : pool -> lactate
    keep    : pool -> 2 store
    give    : store -> pool
