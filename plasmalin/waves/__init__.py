"""Waves: the plane-wave transform, the wave matrix, and the exact dispersion relation."""
