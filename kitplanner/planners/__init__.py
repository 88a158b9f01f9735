"""From a plan to frozen answers; nothing here writes a plan or knows the window."""
