"""Curves to earths."""
