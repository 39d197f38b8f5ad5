"""From the outside world to rows: sheets are opened, read and judged here, row by row."""
