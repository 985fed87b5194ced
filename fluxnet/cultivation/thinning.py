"""Thinning of long records stands beside the data model: reading a long file needs it too."""

from fluxnet.rates.thinning import BinSums, Thinned, add_sums, average_bins, sum_bins, thin

__all__ = ["BinSums", "Thinned", "add_sums", "average_bins", "sum_bins", "thin"]
