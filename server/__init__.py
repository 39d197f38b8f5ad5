"""Ampledger keeps the books of an electrolytic tankhouse: ampere-hours, metal and energy."""

__version__ = "0.1.0"
