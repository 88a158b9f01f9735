"""Energy-budget planner for emergency kits that run on human power."""

__version__ = "0.1.0"
