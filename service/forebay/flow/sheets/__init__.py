"""Outlines on any shore, and surveyed shores: walls as polynomial densities on straight elements."""
