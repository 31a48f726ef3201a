"""Numerical analysis with no design code in it."""
