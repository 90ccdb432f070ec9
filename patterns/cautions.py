"""Cautions for tags and product pages: pointers in plain words, not legal advice."""

_CHILD = (
    "Not for children under 3: small parts and long ties.",
    "Take off for sleep, sport, machines and playgrounds.",
    "Rules differ by country: check before you sell to children.",
)
_METAL_OR_BUTTON = (
    "Pull at every button and bead before you sell: it must hold.",
    "Metal parts: ask your supplier for nickel and lead papers.",
)
_ALWAYS = ("Colours may run when wet.",)


def cautions_for(is_child: bool, has_metal_or_button: bool) -> tuple[str, ...]:
    """Return what a seller is expected to pass on.

    Parameters
    ----------
    is_child
        Whether the size is a child's.
    has_metal_or_button
        Whether the closure has a button or a metal part.

    Returns
    -------
    Short sentences, the most serious first.

    Notes
    -----
    Local rules and licensed advice decide; these are pointers to what to look up.
    """
    child = _CHILD if is_child else ()
    metal = _METAL_OR_BUTTON if has_metal_or_button else ()
    return (*child, *metal, *_ALWAYS)
