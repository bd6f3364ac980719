"""From results to text tables and JSON documents."""
