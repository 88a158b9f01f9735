"""Composition root: commands, the window's start, start-up checks and crash notes."""

import os

# The laws multiply element by element and no matrices, so numpy's pool of threads would only lengthen the start; it is
# read once, when numpy loads.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
