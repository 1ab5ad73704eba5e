"""Surveyed geometry on its way in: map grids, water polygons, open edges, outlines."""
