"""What an order list may hold, and the one error for a list that cannot be read at all."""

MAX_FILE_BYTES = 2 * 1024 * 1024
MAX_ROWS = 5_000
MAX_COLUMNS = 40
MAX_CELL_CHARACTERS = 2_000
MAX_FOR_WHOM_CHARACTERS = 120
MAX_NOTE_CHARACTERS = 500
MAX_DISTINCT_LENGTHS = 60
MAX_SET_CHARACTERS = 40

MAX_UNPACKED_BYTES = 50 * 1024 * 1024
MAX_UNPACKED_RATIO = 250
MAX_PARTS = 1_000
MAX_TAGS = 500_000
MAX_SHEET_CELLS = 1_000_000


class OrderListError(ValueError):
    """The list as a whole cannot be read; the message is one or two sentences for its maker."""
