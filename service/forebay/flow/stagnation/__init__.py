"""Stagnation points: every zero of the velocity in the water, with a proof that none is missing."""
