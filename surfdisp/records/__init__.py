"""Field files to gathers."""

from .coherence import neighbour_coherence
from .conditioning import condition
from .geometry import Geometry, ReceiverLine, ShotGeometry
from .geometry_tables import geometry_beside, read_geometry_csv
from .prepare import STACKED, prepare_records
from .reading import read_gather
from .seg2_writer import write_seg2
from .trace_faults import trace_faults

__all__ = [
    "STACKED",
    "Geometry",
    "ReceiverLine",
    "ShotGeometry",
    "condition",
    "geometry_beside",
    "neighbour_coherence",
    "prepare_records",
    "read_gather",
    "read_geometry_csv",
    "trace_faults",
    "write_seg2",
]
