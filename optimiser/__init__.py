"""Setpoints of a catalytic synthesis section that make most product per unit cost."""

__version__ = "0.1.0"
