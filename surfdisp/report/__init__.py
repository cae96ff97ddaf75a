"""Figures, tables and the report."""
