"""Payloads to tables, figures and numbers: the same for screen and record."""
