"""The calculation sheet: a finished assessment set as a document that can be filed, checked and signed."""
