"""An invented stall in an invented harbour town, to look around in."""
