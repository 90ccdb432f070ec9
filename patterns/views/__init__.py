"""Pages of the pattern library."""
