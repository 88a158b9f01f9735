"""The left side of the window: sections, tables and forms."""
