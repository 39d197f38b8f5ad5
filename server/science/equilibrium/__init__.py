"""Potentials at which nothing flows: standard ones, Nernst, the voltage a reaction asks for."""
