"""How fast the program is, as ratios and limits on the machine at hand; run by `make bench`."""
