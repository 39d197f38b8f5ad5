"""What many readings say together: robust centres, charts, trends, many tests at once."""
