"""An independent check of the moment distribution: the displacement method.

Element flexibilities by Gauss quadrature, one sparse system of compatibility and equilibrium
per line, redundant axial forces settled by refinement.  Shares no code with ``distribution``.
"""

from analysis_core.stiffness_check.compare import largest_difference, largest_differences
from analysis_core.stiffness_check.solution import solve_stiffness

__all__ = ["largest_difference", "largest_differences", "solve_stiffness"]
