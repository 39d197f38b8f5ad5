"""The solution between the plates: density, viscosity, conductivity, diffusion, gas in it."""
