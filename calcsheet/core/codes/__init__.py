"""Seismic code editions, one file each, all answering one checklist."""
