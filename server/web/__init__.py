"""The pages and the API: requests in, HTML and JSON out."""
