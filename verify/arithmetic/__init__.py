"""Balls, mpmath numbers and exact fractions behind one small set of functions."""
