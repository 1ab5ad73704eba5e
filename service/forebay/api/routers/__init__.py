"""HTTP routes, one module per family."""
