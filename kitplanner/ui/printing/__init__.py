"""Printing: one painter in millimetres for paper, PDF and preview."""
