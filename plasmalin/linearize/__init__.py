"""Linearize: orders of smallness, the ledger, the background and its conditions, the audit."""
