"""Pictures of the program, and how they are taken."""
