# Dry weight formed per mole of ATP, and ATP per dry weight.
# Source   Verduyn, Stouthamer, Scheffers & van Dijken 1991, Antonie van Leeuwenhoek 59:49,
#          abstract: 20.8, 28.1 and 16 g/mol (read in print; the quotients
#          were computed).
#          Bauchop & Elsden 1960, as quoted in Nature 1964, 202:1135: mean 10.5, from 8.3 to
#          12.6 g/mol (read in print).
#          Stouthamer 1973, Antonie van Leeuwenhoek 39:545, abstract: 31.9 with preformed
#          monomers, 26.4 where acetate has to be supplied, 28.8 on glucose and salts (read in
#          print; the quotients were computed).
# Growth is lumped: the cells' substance is there, and only the ATP for making cells of it counts.
# 24.626 g is the mass of a mole of the biomass, published as 24.6.
model      Growth from preformed monomers
basis      mmol/g/h

substrate  glucose    C6H12O6
substrate  monomers   CH1.8O0.5N0.2
product    lactate    C3H6O3
biomass    X          CH1.8O0.5N0.2  ash 0 %
carrier    ATP        carries energy
parameter  Y_ATP = 10.5

compartment catabolism
    ferment : glucose -> 2 lactate + 2 ATP

compartment anabolism
    growth  : monomers + (24.626/Y_ATP) ATP -> X

compartment maintenance
    upkeep  : ATP -> nothing

limit      glucose <= 10

variant bauchop-least
    set  Y_ATP = 8.3

variant bauchop-most
    set  Y_ATP = 12.6

variant monomers
    set  Y_ATP = 31.9

variant acetate
    set  Y_ATP = 26.4

variant salts
    set  Y_ATP = 28.8

variant utilis
    set  Y_ATP = 20.8

variant cerevisiae
    set  Y_ATP = 28.1

variant cerevisiae-measured
    set  Y_ATP = 16
