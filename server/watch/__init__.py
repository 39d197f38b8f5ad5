"""What a healthy cell would read, and who does not."""
