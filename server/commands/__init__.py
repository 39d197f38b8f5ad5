"""The commands of the contract, one file for each part of the work at a terminal."""
