"""Tests of the API, one file per resource."""
