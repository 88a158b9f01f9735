"""Widgets and charts."""
