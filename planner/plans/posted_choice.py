"""A choice as forms and addresses carry it: few short words, read strictly."""

import re
from collections.abc import Mapping

from planner.planning.choices import MOST_SUBSTITUTES, Choice, ChoiceError

PAIR = re.compile(r"([0-9]{1,18})-([0-9]{1,18})\Z")


def posted_choice(posted: Mapping[str, str]) -> Choice:
    """Read a choice; names that are no part of one are left aside, ChoiceError for the rest."""
    remnants = posted.get("remnants", "")
    if remnants not in ("", "use", "leave"):
        raise ChoiceError("Remnants are used, or left alone.")
    pairs = []
    words = posted.get("substitutes", "").split()
    if len(words) > MOST_SUBSTITUTES:
        raise ChoiceError(f"At most {MOST_SUBSTITUTES} shades can be replaced.")
    for word in words:
        match = PAIR.match(word)
        if match is None:
            raise ChoiceError("A substitute is a shade for another shade.")
        pairs.append((int(match[1]), int(match[2])))
    return Choice(
        remnants=remnants != "leave",
        start=posted.get("start", ""),
        lengths=posted.get("lengths", ""),
        supplier=posted.get("supplier", ""),
        substitutes=tuple(pairs),
    )


def choice_to_post(choice: Choice) -> dict[str, str]:
    """Give the names and words that `posted_choice` reads, those that say anything."""
    values = {
        "remnants": "" if choice.remnants else "leave",
        "start": choice.start,
        "lengths": choice.lengths,
        "supplier": choice.supplier,
        "substitutes": " ".join(f"{old}-{new}" for old, new in choice.substitutes),
    }
    return {name: value for name, value in values.items() if value}
