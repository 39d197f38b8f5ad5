"""The API under /api/v1: JSON, one file per resource."""
