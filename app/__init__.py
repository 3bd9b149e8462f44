"""Weirbook: from the discharge point to the signed certificate, one journal."""

__version__ = "0.1.0"
