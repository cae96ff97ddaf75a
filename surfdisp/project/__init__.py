"""The project file: everything one run of the job found, in one HDF5 file."""

from .store import read_project, write_project

__all__ = ["read_project", "write_project"]
