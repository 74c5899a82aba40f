"""Audits existing BIST pattern generators from their gate-level netlists."""

__version__ = "0.1.0"
