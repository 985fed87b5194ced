use "circle-b.flux"
