"""Floor 5: mass balances of chemostat, batch, fed-batch and gas: raw data to rates with errors."""
