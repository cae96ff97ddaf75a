"""Layered earth to modes, sensitivities and the full wavefield."""

from .closed_forms import half_space_rayleigh_speed, lamb_step_response
from .modes import mode_count, phase_velocity, phase_velocity_and_sensitivity, sensitivity
from .wavefield import hammer_blow, synthesize

__all__ = [
    "half_space_rayleigh_speed",
    "hammer_blow",
    "lamb_step_response",
    "mode_count",
    "phase_velocity",
    "phase_velocity_and_sensitivity",
    "sensitivity",
    "synthesize",
]
