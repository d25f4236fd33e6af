"""Dimensionless numbers and published correlations, one file a family."""
