"""InversionResult: the best earth, how well it fits, and the earths around it."""

from __future__ import annotations

from .checks import FloatArray, float_array
from .curve import DispersionCurve
from .ensemble import Ensemble
from .layered_earth import LayeredEarth
from .noun import noun, set_field, tagged


@noun
class InversionResult:
    """What the inversion of one curve returns; a search that did not converge says so in `message`.

    Parameters
    ----------
    curve : DispersionCurve
        The data.
    earth : LayeredEarth
        The best earth.
    ensemble : Ensemble
        Earths that express the uncertainty: covariance, several layerings, extension below the data.
    predicted : array (n,)
        Velocity of the best earth at the curve's frequencies [m/s]; NaN where its mode does not exist.
    chi_square : float
        Mean squared residual in units of sigma: 1 is a fit to the noise.
    resolution : array (n_layers,)
        Diagonal of the resolution matrix in ln Vs: 1 where the data decide, 0 where the prior does.
    resolved_depth : float
        Depth down to which the data speak [m].
    layerings : tuple of str
        One line per layering tried: its name, number of layers, chi-square and weight.
    converged : bool
    message : str
    iterations : int
    notes : tuple of str
        Warnings for the reader of the report.
    """

    curve: DispersionCurve
    earth: LayeredEarth
    ensemble: Ensemble
    predicted: FloatArray = tagged("m/s", "point")
    chi_square: float
    resolution: FloatArray = tagged("", "layer")
    resolved_depth: float = tagged("m")
    layerings: tuple[str, ...] = ()
    converged: bool = True
    message: str = ""
    iterations: int = 0
    notes: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        set_field(self, "predicted", float_array(self.predicted, "predicted"))
        set_field(self, "resolution", float_array(self.resolution, "resolution"))
        set_field(self, "layerings", tuple(self.layerings))
        set_field(self, "notes", tuple(self.notes))
