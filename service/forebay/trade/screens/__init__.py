"""Fish-protection screens: how water meets them, and what limits say of it."""
