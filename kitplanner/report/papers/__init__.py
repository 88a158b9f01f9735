"""Content of each paper, one module per paper."""
