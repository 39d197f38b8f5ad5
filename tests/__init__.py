"""The tests; their folders mirror those of the server."""
