"""The only mutable state: the open document, its undo stack and its running answers."""
