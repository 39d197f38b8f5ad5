"""Tables, and the way to them; no arithmetic."""
