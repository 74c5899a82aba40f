"""The tests. This file is needed because an installed dependency brings a top-level ``tests`` package of its own."""
