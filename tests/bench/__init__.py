"""How fast the tool is, as ratios within one run and times on this machine: `make bench`."""
