"""Inlets under a free surface: submergence, similarity, swirl."""
