"""The settings of one survey: what may stand in a configuration file, with units in the names and limits.

Everything has a default except the records themselves, so that a run on bare field files and a run from a
configuration are the same run.
"""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field, model_validator

Positive = Annotated[float, Field(gt=0.0, allow_inf_nan=False)]
NonNegative = Annotated[float, Field(ge=0.0, allow_inf_nan=False)]
Finite = Annotated[float, Field(allow_inf_nan=False)]


class Section(BaseModel):
    """A section of the configuration: immutable, and unknown names are refused."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class ReceiverSettings(Section):
    """Receiver layout that wins over the headers: evenly spaced, or one position per channel."""

    first_m: Finite = 0.0
    spacing_m: Positive | None = None
    count: Annotated[int, Field(ge=2)] | None = None
    positions_m: tuple[Finite, ...] | None = None
    elevations_m: tuple[Finite, ...] | None = None

    @model_validator(mode="after")
    def _one_of_two_ways(self) -> ReceiverSettings:
        even = self.spacing_m is not None and self.count is not None
        if even == (self.positions_m is not None):
            raise ValueError("give either spacing_m with count, or positions_m")
        return self


class ShotSettings(Section):
    """Source position of one file that wins over its headers."""

    file: str
    source_m: Finite
    off_line_m: Finite = 0.0
    elevation_m: Finite = 0.0
    delay_s: Finite | None = None


class RecordSettings(Section):
    """Which field files, and the geometry where the headers do not carry it."""

    files: tuple[str, ...] = Field(min_length=1)
    geometry_csv: str | None = None
    receivers: ReceiverSettings | None = None
    shots: tuple[ShotSettings, ...] = ()
    minimum_traces: Annotated[int, Field(ge=4)] = 8


class ConditioningSettings(Section):
    """Band, surface-wave window and the slowest wave to be kept."""

    minimum_frequency_hz: Positive | None = None
    maximum_frequency_hz: Positive | None = None
    window_slowest_m_s: Positive | None = None
    window_fastest_m_s: Positive | None = None
    slowest_wave_m_s: Positive = 50.0


class ImageSettings(Section):
    """Scanned range; what is left out is chosen from the spread and the record."""

    minimum_frequency_hz: Positive | None = None
    maximum_frequency_hz: Positive | None = None
    minimum_velocity_m_s: Positive | None = None
    maximum_velocity_m_s: Positive | None = None


class InversionSettings(Section):
    """Layering, the earth's other properties, and the draws around the best earths."""

    layering_ratios: tuple[Annotated[float, Field(gt=1.0)], ...] | None = None
    thicknesses_m: tuple[Positive, ...] | None = None
    poisson_ratio: Annotated[float, Field(ge=0.0, lt=0.5)] | None = None
    water_table_depth_m: NonNegative | None = None
    saturated_vp_m_s: Positive | None = None
    density_kg_m3: Positive | None = None
    minimum_vs_m_s: Positive | None = None
    maximum_vs_m_s: Positive | None = None
    seed: Annotated[int, Field(ge=0)] = 1


class SiteSettings(Section):
    """Site quantities, and borehole logs to be laid over the profile."""

    class_bounds: Literal["SI", "ft/s"] = "SI"
    borehole_logs: tuple[str, ...] = ()


class Settings(Section):
    """One survey."""

    title: str = "Surface-wave survey"
    records: RecordSettings
    conditioning: ConditioningSettings = ConditioningSettings()
    image: ImageSettings = ImageSettings()
    inversion: InversionSettings = InversionSettings()
    site: SiteSettings = SiteSettings()
