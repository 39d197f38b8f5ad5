"""What a healthy cell would read in a round, and how likely a short is in one that reads less."""
