import pytest

from patterns.cautions import cautions_for

# In our own words, after: small parts under 3, 16 CFR 1501 and EN 71-1; nickel, REACH Annex
# XVII entry 27 and EN 1811; lead, CPSIA; general product safety, EU 2023/988.
# Titles and numbers only: the texts are not in the repository. Local rules decide.
CHILD = [
    "Not for children under 3: small parts and long ties.",
    "Take off for sleep, sport, machines and playgrounds.",
    "Rules differ by country: check before you sell to children.",
]
METAL = "Metal parts: ask your supplier for nickel and lead papers."
WET = "Colours may run when wet."


@pytest.mark.parametrize("has_metal_or_button", [True, False])
@pytest.mark.parametrize("is_child", [True, False])
def test_cautions_for(is_child, has_metal_or_button):
    cautions = cautions_for(is_child, has_metal_or_button)
    assert all((caution in cautions) == is_child for caution in CHILD)
    assert (METAL in cautions) == has_metal_or_button
    assert WET in cautions


def test_cautions_for_child_come_first():
    assert list(cautions_for(True, True)[:3]) == CHILD
