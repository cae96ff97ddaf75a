"""Earths to site quantities."""
