"""Lengths, money and swatches in templates, in the workshop's own unit and currency."""

from decimal import Decimal
from typing import Any

from babel.numbers import format_currency
from django import template
from django.template import Context
from django.utils.html import format_html
from django.utils.safestring import SafeString

from inventory.measures import format_length, format_number

register = template.Library()


def unit_of(context: Context) -> str:
    """The unit of a plan's snapshot where the page shows one, else the workshop's."""
    unit = context.get("length_unit")
    if unit:
        return str(unit)
    workshop = context.get("workshop")
    return workshop.length_unit if workshop else "cm"


@register.simple_tag(takes_context=True)
def length(context: Context, length_mm: int) -> str:
    return format_length(int(length_mm), unit_of(context))


@register.simple_tag(takes_context=True)
def length_number(context: Context, length_mm: int) -> str:
    return format_number(int(length_mm), unit_of(context))


@register.simple_tag(takes_context=True)
def length_unit_name(context: Context) -> str:
    return unit_of(context)


@register.simple_tag(takes_context=True)
def money(context: Context, amount: Decimal) -> str:
    currency = context.get("currency")
    workshop = context.get("workshop")
    if not currency:
        currency = workshop.currency if workshop else "EUR"
    return money_words(amount, currency)


def money_words(amount: Decimal, currency: str) -> str:
    """An amount as every page writes it."""
    return format_currency(amount, currency, locale="en_GB")


@register.simple_tag
def swatch(shade: Any) -> SafeString:
    """A drawn dab of thread; the code and name stand beside it, so it says nothing alone."""
    return format_html(
        '<svg class="swatch" viewBox="0 0 22 16" width="22" height="16" aria-hidden="true">'
        '<rect x="1" y="1" width="20" height="14" rx="6" fill="{}" stroke="currentColor"'
        ' stroke-width="1"/></svg>',
        shade["colour"] if isinstance(shade, dict) else shade.colour,
    )


@register.filter
def share(value: Decimal) -> str:
    """0.02 as `2`, for a text that says per cent."""
    return f"{Decimal(value) * 100:.1f}".rstrip("0").rstrip(".")
