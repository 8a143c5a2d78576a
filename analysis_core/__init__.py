"""Spanledger: beam lines from IFC models, solved by moment distribution, posted back.

The public road is ``pipeline.run``; the parts along it can be used by themselves.
"""

__version__ = "0.1.0"
