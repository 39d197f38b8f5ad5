"""How sure a figure is: propagation, trial, and measurements made to agree with a balance."""
