"""The error tree.  Catch AnalysisError and you have caught them all.

    AnalysisError
      IfcReadError       (ValueError)       the file cannot be read as a model
      IfcWriteError      (OSError)          the results cannot be written where asked
      JobError           (ValueError)       the job file is not understood
      ModelError         (ValueError)       the model cannot be analysed as given
        MechanismError                      ... because parts of it move freely
      ConvergenceError   (ArithmeticError)  an iteration ran out of sweeps

Whatever a user's model can cause is one of these; a programmer's slip in a helper is
a plain ValueError or TypeError.  A message names the object, what was received, what
is permitted and the next step.
"""

from __future__ import annotations


class AnalysisError(Exception):
    """Anything that stops the work and that the user can do something about."""


class IfcReadError(AnalysisError, ValueError):
    """The file cannot be read as a model."""


class IfcWriteError(AnalysisError, OSError):
    """The results cannot be written where asked."""

    def __str__(self) -> str:
        return str(self.args[0]) if self.args else ""


class JobError(AnalysisError, ValueError):
    """The job file is not understood."""


class ModelError(AnalysisError, ValueError):
    """The model cannot be analysed as given."""


class MechanismError(ModelError):
    """Parts of the line move freely.

    ``joints`` are the ids of the joints that move, ``remedy`` says what would stop them.
    """

    def __init__(self, message: str, *, joints: tuple[int, ...], remedy: str) -> None:
        super().__init__(message)
        self.joints = joints
        self.remedy = remedy


class ConvergenceError(AnalysisError, ArithmeticError):
    """An iteration ran out of sweeps."""
