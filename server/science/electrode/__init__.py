"""How fast a reaction goes at an electrode, and how fast the solution can feed it."""
