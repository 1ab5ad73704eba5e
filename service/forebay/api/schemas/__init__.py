"""What travels over the wire: pydantic models with units in the schema."""
