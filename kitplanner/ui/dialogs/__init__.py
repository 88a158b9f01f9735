"""Questions to the user."""
