"""Published reference data and answers."""
