"""The books of electrorefining alone: anodes, slimes, copper in solution, the bleed."""
