"""Encoders, one media type a file: an operation lists those that it can answer with, the default first."""
