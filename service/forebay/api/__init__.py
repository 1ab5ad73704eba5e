"""HTTP only: convert, call once, convert back."""
