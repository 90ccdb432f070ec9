"""Contrast between thread colours, so that drawings read on any ground and in black and white."""

import re

OUTLINE_CONTRAST = 3.0
_COLOUR = re.compile(r"#[0-9a-fA-F]{6}\Z")


class ColourError(ValueError):
    """A colour that is not written as #rrggbb."""


def channels(colour: str) -> tuple[int, int, int]:
    """Return red, green and blue of "#rrggbb", 0 to 255 each.

    Raises
    ------
    ColourError
        When the colour is written in another way.
    """
    if not isinstance(colour, str) or not _COLOUR.match(colour):
        raise ColourError(f"'{str(colour)[:20]}' is not a colour. Write it as #rrggbb.")
    return int(colour[1:3], 16), int(colour[3:5], 16), int(colour[5:7], 16)


def relative_luminance(colour: str) -> float:
    """Return the relative luminance of a colour, 0 for black to 1 for white.

    References
    ----------
    W3C, Web Content Accessibility Guidelines 2.2 (2023), "relative luminance".
    """
    red, green, blue = (_linear(channel / 255) for channel in channels(colour))
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


def _linear(value: float) -> float:
    return value / 12.92 if value <= 0.04045 else float(((value + 0.055) / 1.055) ** 2.4)


def contrast_ratio(first: str, second: str) -> float:
    """Return the contrast of two colours, 1 to 21.

    References
    ----------
    W3C, Web Content Accessibility Guidelines 2.2 (2023), "contrast ratio".
    """
    darker, lighter = sorted((relative_luminance(first), relative_luminance(second)))
    return (lighter + 0.05) / (darker + 0.05)


def ink_on(colour: str) -> str:
    """Return black or white, whichever stands out more from a thread of this colour.

    Raises
    ------
    ColourError
        When the colour is not written as #rrggbb.

    Notes
    -----
    One of the two always reaches 4.5 : 1, the contrast that WCAG 2.2, success criterion 1.4.3,
    asks of text: their product is 21, and the square root of it is 4.58.
    """
    return max("#000000", "#ffffff", key=lambda ink: contrast_ratio(colour, ink))


def working_colours(colour: str) -> str:
    """Return the tone for outlines and lines on a thread of this colour.

    Parameters
    ----------
    colour
        The thread's colour, "#rrggbb".

    Returns
    -------
    The nearest darker tone of the same colour that stands out 3 : 1, "#rrggbb"; for thread
    too dark for that, the nearest lighter one.

    Raises
    ------
    ColourError
        When the colour is not written as #rrggbb.

    Notes
    -----
    3 : 1 is the least contrast of graphics in WCAG 2.2, success criterion 1.4.11.
    """
    target = 0 if contrast_ratio(colour, "#000000") >= OUTLINE_CONTRAST else 255
    enough = 255
    too_little = 0
    while enough - too_little > 1:
        share = (enough + too_little) // 2
        if contrast_ratio(colour, _mixed(colour, target, share)) >= OUTLINE_CONTRAST:
            enough = share
        else:
            too_little = share
    return _mixed(colour, target, enough)


def _mixed(colour: str, target: int, share: int) -> str:
    """Move every channel by share / 255 of the way to the target."""
    moved = (channel + round((target - channel) * share / 255) for channel in channels(colour))
    return "#" + "".join(f"{channel:02x}" for channel in moved)
