"""How the shelf writes and draws totals."""

from decimal import ROUND_HALF_UP, Decimal

from django import template
from django.template import Context

from inventory.measures import UNITS
from inventory.templatetags.measures import unit_of

register = template.Library()


@register.simple_tag(takes_context=True)
def total_unit_name(context: Context) -> str:
    """The unit in which thread is counted up: one for a whole column."""
    return "yd" if unit_of(context) == "in" else "m"


@register.simple_tag(takes_context=True)
def total_number(context: Context, length_mm: int) -> str:
    unit = UNITS[total_unit_name(context)]
    exact = Decimal(length_mm) * unit.denominator / unit.numerator
    return f"{exact.quantize(Decimal('0.01'), ROUND_HALF_UP):,}"


@register.filter
def percent_of(length_mm: int, longest_mm: int) -> str:
    """How wide a bar is beside the longest one, which leaves room for its outline."""
    return f"{max(0.4, 98 * length_mm / longest_mm) if longest_mm else 0:.2f}"
