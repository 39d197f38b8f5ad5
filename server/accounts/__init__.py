"""The plant's books: storage read, science applied, plain results returned."""
