"""Results turned into Plotly figures, as plain dictionaries."""
