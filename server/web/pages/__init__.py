"""The pages: HTML, one file per page."""
