"""Plans as rows: loading what a plan needs, storing it, and showing it."""
