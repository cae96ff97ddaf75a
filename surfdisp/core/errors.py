"""The exceptions of surfdisp: one small tree, every message written for the user.

A message says what was found, where (file, trace, field), what is expected, and what to do.
"""


class SurfdispError(Exception):
    """Base of every error that surfdisp raises on purpose."""


class InputError(SurfdispError, ValueError):
    """An argument, a setting or a record breaks its contract."""


class FormatError(InputError):
    """A field file cannot be read as what it claims to be."""


class StoreError(SurfdispError):
    """A project file cannot be read or written."""


class StepError(SurfdispError):
    """A step of the job cannot be done on input that is valid in itself."""
