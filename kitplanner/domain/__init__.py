"""The laws: pure mathematics on numbers and arrays, numpy only."""
