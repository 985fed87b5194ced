# expect: use-circle "circle-a.flux"
use "circle-a.flux"
