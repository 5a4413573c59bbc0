"""A record held against itself: fingerprints, print, replay, second route, signatures."""
