"""The text of one cell: what is cleaned on the way in, and what cannot be read."""

import re

UNREADABLE = "�"
"""U+FFFD, which stands where a character could not be read."""

# Tab and newline may stand inside a quoted cell. Half surrogates and the two non-characters
# cannot be stored, shown or printed any more than NUL can.
_NOT_TEXT = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\ud800-\udfff\ufffe\uffff]")
_GUARDED = re.compile("'[=+\\-@\t\r]")


def clean_cell(text: str) -> str:
    """Make a cell safe to store and to show, losing nothing that is text.

    Parameters
    ----------
    text
        The cell as it came.

    Returns
    -------
    str
        The same text with newlines as ``\\n`` and `UNREADABLE` in the place of every control
        character and half surrogate, so that its position can still be named.
    """
    if "\r" in text:
        text = text.replace("\r\n", "\n").replace("\r", "\n")
    return _NOT_TEXT.sub(UNREADABLE, text)


def unguarded(text: str) -> str:
    """Take off the apostrophe that keeps a spreadsheet from reading text as a formula.

    Parameters
    ----------
    text
        The cell as it stands in a file.

    Returns
    -------
    str
        The text without a leading apostrophe, where ``= + - @``, tab or CR follows it.

    References
    ----------
    OWASP Application Security Verification Standard 5.0, requirement 1.2.10.
    """
    return text[1:] if _GUARDED.match(text) else text


def one_line(text: str) -> str:
    """Join a cell's words with single spaces.

    Parameters
    ----------
    text
        The cell.

    Returns
    -------
    str
        The text without outer spaces, tabs and newlines, and with one space for each run inside.
    """
    return " ".join(text.split())


def shown(text: str, most: int = 40) -> str:
    """Quote a cell in a message.

    Parameters
    ----------
    text
        The cell.
    most
        The most characters to show.

    Returns
    -------
    str
        The text in apostrophes, on one line, cut off with an ellipsis where it is longer.
    """
    line = one_line(text)
    return f"'{line[:most].rstrip()}…'" if len(line) > most else f"'{line}'"


def listed(words: list[str], most: int = 5) -> str:
    """Write names as a list in a sentence.

    Parameters
    ----------
    words
        The names.
    most
        The most names to write out.

    Returns
    -------
    str
        ``"Dawn, Dusk and Noon"``; ``"Dawn, Dusk and 3 more"`` where there are too many.
    """
    if len(words) > most:
        words = [*words[:most], f"{len(words) - most} more"]
    return " and ".join(filter(None, [", ".join(words[:-1]), *words[-1:]]))
