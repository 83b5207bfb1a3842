"""outcouple."""
