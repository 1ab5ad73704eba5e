"""The demonstration: an invented site, sent to a service started for it."""
