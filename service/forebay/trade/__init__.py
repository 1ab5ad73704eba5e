"""Knowledge of the trade: water properties, screen criteria, limits of applicability."""
