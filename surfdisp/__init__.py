"""surfdisp: from the field files of a surface-wave survey to a shear-velocity profile with its uncertainty.

Everything public is reached from here, as in ``import surfdisp as sd``; nothing heavy is loaded before it
is used.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .core import DispersionCurve as DispersionCurve
    from .core import Gather as Gather
    from .core import LayeredEarth as LayeredEarth

__version__ = "0.1.0"

_HOMES = {
    "core": ["DispersionCurve", "DispersionImage", "Ensemble", "Gather", "InputError", "InversionResult",
             "LayeredEarth", "Picks", "Sensitivity", "SiteResult", "SurfdispError"],
    "earth": ["mode_count", "phase_velocity", "sensitivity", "synthesize"],
    "records": ["condition", "prepare_records", "read_gather"],
    "dispersion": ["combine_picks", "curve_from_gathers", "dispersion_image", "pick", "stack_images"],
    "inversion": ["invert"],
    "site": ["average_velocity", "site_result", "vs30"],
}  # fmt: skip
_HOME_OF = {name: home for home, names in _HOMES.items() for name in names}

__all__ = ["__version__", *sorted(_HOME_OF)]


def __getattr__(name: str) -> Any:
    if name not in _HOME_OF:
        raise AttributeError(f"module 'surfdisp' has no attribute {name!r}")
    return getattr(import_module(f".{_HOME_OF[name]}", __name__), name)


def __dir__() -> list[str]:
    return list(__all__)
