"""The mathematics of plane flow: SI units, no input or output, no settings."""
