"""From the building as read to lines and frames: what belongs together, what holds it, what
acts on it.

Every decision is visible: joints say what supports them and why, findings say what was assumed
or left out.
"""

from analysis_core.idealise.idealisation import idealise

__all__ = ["idealise"]
