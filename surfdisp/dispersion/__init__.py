"""Gathers to images, picks and curves."""
