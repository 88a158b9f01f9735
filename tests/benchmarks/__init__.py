"""Speed figures of the planner: `python -m tests.benchmarks [NAME ...] [--json]` from the project's root."""
