"""Layered earth to modes, sensitivities and the full wavefield."""

from .modes import mode_count, phase_velocity, phase_velocity_and_sensitivity, sensitivity

__all__ = ["mode_count", "phase_velocity", "phase_velocity_and_sensitivity", "sensitivity"]
