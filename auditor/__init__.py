"""Audits existing BIST pattern generators from their gate-level netlists."""
