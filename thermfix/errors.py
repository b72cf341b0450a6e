"""Every error thermfix raises on purpose.

::

    ThermfixError                    exit 1
    ├── InputError (ValueError)      exit 2   we were given something we refuse
    │   ├── OutOfRange                        a quantity outside its documented range
    │   └── InspectionError                   one or more faults in an inspection file
    ├── FrameError                   exit 3   a file we cannot read as a frame
    └── PhysicsError                 exit 4   legal inputs, but no temperature exists

A message says what, where and the allowed range; ``hint`` says the next step. Keyword
arguments with defaults keep the errors picklable, so that worker processes can raise them.
"""

from dataclasses import dataclass


class ThermfixError(Exception):
    """Base of all errors raised on purpose; ``exit_code`` is what the command line returns."""

    exit_code = 1

    def __init__(self, message: str = "", *, hint: str = "") -> None:
        super().__init__(message)
        self.hint = hint

    def __reduce__(self) -> tuple[object, ...]:
        return (_rebuild, (type(self), self.args, self.__dict__))


class InputError(ThermfixError, ValueError):
    """We were given something we refuse."""

    exit_code = 2


class OutOfRange(InputError):
    """A quantity lies outside its documented range."""

    @classmethod
    def of(cls, name: str, value: float, low: float, high: float, unit: str = "1") -> "OutOfRange":
        """Return the error for one value and its allowed range."""
        return cls(
            f"{name} is {value:g}; it must lie in {low:g} to {high:g} [{unit}].",
            hint=f"Is {name} in [{unit}], not in percent or another scale?",
        )


@dataclass(frozen=True, slots=True, order=True)
class Fault:
    """One fault of a file: line (from 1, 0 = the whole file), dotted key path, plain sentence."""

    line: int
    key: str
    message: str

    def __str__(self) -> str:
        where = f"line {self.line}" if self.line else "whole file"
        return f"{where}: {self.key}: {self.message}" if self.key else f"{where}: {self.message}"


class InspectionError(InputError):
    """One or more faults in an inspection file, all reported at once."""

    def __init__(self, message: str = "", *, faults: tuple[Fault, ...] = (), hint: str = "") -> None:
        super().__init__(message, hint=hint)
        self.faults = faults

    def __str__(self) -> str:
        return "\n".join([super().__str__(), *(f"  {fault}" for fault in self.faults)])


class FrameError(ThermfixError):
    """A file that cannot be read as a frame."""

    exit_code = 3


class PhysicsError(ThermfixError):
    """Legal inputs, but no temperature exists."""

    exit_code = 4


def _rebuild(cls: type[ThermfixError], args: tuple[object, ...], state: dict[str, object]) -> ThermfixError:
    error = cls.__new__(cls, *args)
    error.args = args
    error.__dict__.update(state)
    return error
