"""From order lines to a plan: explode into pieces, net against the shelf, say what to do."""
