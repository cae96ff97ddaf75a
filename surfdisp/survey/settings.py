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


Limits = tuple[float | None, float | None]


class Section(BaseModel):
    """A section of the configuration: immutable, and unknown names are refused."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class ReceiverSettings(Section):
    """Receivers, at even distances or one position per channel; wins over headers and tables."""

    first_m: Finite = 0.0
    spacing_m: Positive | None = None
    positions_m: tuple[Finite, ...] | None = None
    elevations_m: tuple[Finite, ...] | None = None

    @model_validator(mode="after")
    def _one_of_two_ways(self) -> ReceiverSettings:
        if (self.spacing_m is None) == (self.positions_m is None):
            raise ValueError("give either spacing_m or positions_m")
        return self


class ShotSettings(Section):
    """Where one shot was; what is left out the header says."""

    file: str
    source_m: Finite | None = None
    source_off_line_m: Finite | None = None
    source_elevation_m: Finite | None = None
    delay_s: Finite | None = None


class RecordSettings(Section):
    """Which field files, and the geometry where the headers do not carry it.

    Positions given here win over the CSV tables named, those over shots.csv and receivers.csv beside the
    records, and all of them over the headers.
    """

    files: tuple[str, ...] = Field(min_length=1)
    geometry_tables: tuple[str, ...] = ()
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

    @model_validator(mode="after")
    def _ordered(self) -> ConditioningSettings:
        for low, high in (self.band, self.window):
            if low is not None and high is not None and not low < high:
                raise ValueError(f"the lower limit must be below the upper one; got {low:g} and {high:g}")
        return self

    @property
    def band(self) -> Limits:
        """Lowest and highest frequency [Hz]; None for no limit on that side."""
        return self.minimum_frequency_hz, self.maximum_frequency_hz

    @property
    def window(self) -> Limits:
        """Slowest and fastest velocity of the surface-wave window [m/s]; None for no limit on that side."""
        return self.window_slowest_m_s, self.window_fastest_m_s


class ImageSettings(Section):
    """Scanned range; what is left out is chosen from the spread and the record."""

    minimum_frequency_hz: Positive | None = None
    maximum_frequency_hz: Positive | None = None
    minimum_velocity_m_s: Positive | None = None
    maximum_velocity_m_s: Positive | None = None


class InversionSettings(Section):
    """Layering, the earth's other properties, and the draws around the best earths."""

    layering_ratios: tuple[Annotated[float, Field(ge=1.0, le=10.0)], ...] | None = None
    layer_thicknesses_m: tuple[tuple[Positive, ...], ...] | None = None
    poisson_ratio: Annotated[float, Field(ge=0.0, lt=0.5)] | None = None
    water_table_depth_m: NonNegative | None = None
    dry: bool = False
    saturated_vp_m_s: Positive | None = None
    density_kg_m3: Positive | None = None
    minimum_vs_m_s: Positive | None = None
    maximum_vs_m_s: Positive | None = None
    allow_decrease: bool = True
    earths: Annotated[int, Field(ge=100, le=100_000)] | None = None
    seed: Annotated[int, Field(ge=0)] = 0

    @model_validator(mode="after")
    def _consistent(self) -> InversionSettings:
        if self.dry and self.water_table_depth_m is not None:
            raise ValueError("give either dry = true or water_table_depth_m")
        low, high = self.minimum_vs_m_s, self.maximum_vs_m_s
        if (low is None) != (high is None):
            raise ValueError("give minimum_vs_m_s and maximum_vs_m_s together")
        if low is not None and high is not None and not low < high:
            raise ValueError(f"minimum_vs_m_s must be below maximum_vs_m_s; got {low:g} and {high:g}")
        return self


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
