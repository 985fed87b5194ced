# expect: basis-differs "basis mmol/L/h"
basis mmol/L/h
product ethanol, CO2
limit ethanol <= 3
