"""Figures, tables and the report."""

from .console_text import summary_text
from .tables import summary, write_tables

__all__ = ["summary", "summary_text", "write_tables"]
