"""Layered earth to modes, sensitivities and the full wavefield."""
