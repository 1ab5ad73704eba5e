"""Pictures of results, the same bytes for the same input."""
