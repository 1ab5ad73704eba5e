"""Where the water of intakes comes from: shares, widths, dividing streamlines and zones."""
