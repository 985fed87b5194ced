substrate glucose
product   ethanol, CO2
# expect: bad-cargo "Fd"
carrier   Fd
# expect: bad-cargo "carry energy" certain
carrier   ATP carry energy
# expect: bad-cargo "2 electrons" certain
carrier   NADH 2 electrons
# expect: bad-cargo "two electrons"
carrier   NADPH carries two electrons
# expect: bad-cargo "0 electrons"
carrier   QH2 carries 0 electrons
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
