"""The sums of a shift, each with its inputs, formula, source and uncertainty."""
