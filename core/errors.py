"""Errors that the core raises, as one small tree.

CoreError
├── InputError            a value that cannot be taken (also a ValueError)
│   ├── UnitError         text that is no quantity of the wanted kind
│   └── OutOfRangeError   a quantity outside its range
├── LayoutError           no valid polygon can be made
├── ModelError            a model cannot answer
│   └── ConvergenceError  an iteration that did not settle
└── FileError             a file that cannot be read or written
    ├── ExistingFileError
    ├── ProjectFormatError
    └── ExportError
Cancelled                 the user changed their mind; not an error

Each message is one line that says what, where and what would be accepted.
"""

from __future__ import annotations

from pathlib import Path


class CoreError(Exception):
    """Base of every error the core raises on purpose."""


class InputError(CoreError, ValueError):
    """A value that cannot be taken.

    Attributes
    ----------
    field : str
        Dotted name of the parameter, or an empty string.
    value : object
        What was given.
    allowed : str
        What would be accepted, in words.
    """

    def __init__(
        self, message: str, *, field: str = "", value: object = None, allowed: str = ""
    ) -> None:
        super().__init__(message)
        self.field = field
        self.value = value
        self.allowed = allowed


class UnitError(InputError):
    """Text that is no quantity of the wanted kind."""


class OutOfRangeError(InputError):
    """A quantity outside its range."""


class LayoutError(CoreError):
    """No valid polygon can be made from the design.

    Attributes
    ----------
    field : str
        Dotted name of the parameter that cures it.
    """

    def __init__(self, message: str, *, field: str = "") -> None:
        super().__init__(message)
        self.field = field


class ModelError(CoreError):
    """A model cannot answer."""


class ConvergenceError(ModelError):
    """An iteration that did not settle.

    Attributes
    ----------
    residual : float
        What was left when it stopped.
    iterations : int
        How many steps were taken.
    """

    def __init__(self, message: str, *, residual: float, iterations: int) -> None:
        super().__init__(message)
        self.residual = residual
        self.iterations = iterations


class FileError(CoreError):
    """A file that cannot be read or written.

    Attributes
    ----------
    path : Path or None
        The file.
    """

    def __init__(self, message: str, *, path: Path | None = None) -> None:
        super().__init__(message)
        self.path = path


class ExistingFileError(FileError):
    """A file that is there already and may not be replaced."""


class ProjectFormatError(FileError):
    """A project file that is damaged, newer or not one of ours."""


class ExportError(FileError):
    """An export that cannot be written."""


class Cancelled(Exception):  # noqa: N818 - it is not an error
    """The user, or a newer edit, asked a long task to stop."""
