"""Item models over the records of a plan."""
