"""From a History to ages of every fitment and to life data per part type."""
