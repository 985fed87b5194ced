# A table of rates that was given a model's name.
# expect: wrong-kind-of-file file
run,species,direction,rate,sd,unit
A,glucose,in,2.05,3 %,mmol/g/h
A,CO2,out,4.40,5 %,mmol/g/h
