"""How a book on disk comes to its present tables."""
