"""Spanledger in FreeCAD: beam lines read from IFC, decided, balanced and posted."""
