"""Declare: fields, parameters, operators with their rank, and laws."""
