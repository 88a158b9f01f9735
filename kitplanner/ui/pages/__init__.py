"""Pages of answers."""
