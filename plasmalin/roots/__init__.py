"""Roots: all complex roots with proof, and branches tracked through crossings."""
