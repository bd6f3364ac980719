"""The invented fleet: a seeded generator and the CSV files it makes."""
