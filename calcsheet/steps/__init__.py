"""Stages of the calculation: typed inputs to typed results, with worked lines, cautions and evidence."""
