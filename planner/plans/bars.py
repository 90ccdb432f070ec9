"""A skein drawn as a bar to scale: a segment for each piece, what is left hatched."""

from django.utils.html import format_html, format_html_join
from django.utils.safestring import SafeString

LABEL_PER_CENT = 3.2


def stock_bar(
    *,
    title: str,
    colour: str,
    length_mm: int,
    scale_mm: int,
    segments: list[tuple[str, int]],
) -> SafeString:
    """Return the bar as SVG; one of `scale_mm` fills the width, shorter ones stay to scale.

    Places are per cent of the width, so the bar stretches while its numbers do not. The page
    has to hold the pattern `hatch` (templates/planner/_hatch.html).
    """
    per_mm = 100 / max(scale_mm, length_mm, 1)
    parts = []
    start = 0.0
    for label, piece_mm in segments:
        parts.append(_segment(start, piece_mm * per_mm, colour, label))
        start += piece_mm * per_mm
    parts.append(_rest(start, length_mm * per_mm))
    return format_html(
        '<svg class="thread-bar" height="38" role="img"><title>{}</title>{}</svg>',
        title,
        format_html_join("", "{}", ((part,) for part in parts)),
    )


def _segment(start: float, width: float, colour: str, label: str) -> SafeString:
    """The colour runs along the top only, so the number stays readable on every shade."""
    text = SafeString("")
    if width >= LABEL_PER_CENT * len(label):
        text = format_html(
            '<text x="{}%" y="27" text-anchor="middle" fill="currentColor">{}</text>',
            f"{start + width / 2:.3f}",
            label,
        )
    return format_html(
        '<rect x="{x}%" y="1" width="{w}%" height="9" fill="{c}"/>'
        '<rect x="{x}%" y="1" width="{w}%" height="36" fill="none" stroke="currentColor"/>{t}',
        x=f"{start:.3f}",
        w=f"{max(width, 0.1):.3f}",
        c=colour,
        t=text,
    )


def _rest(start: float, end: float) -> SafeString:
    if end - start < 0.05:
        return SafeString("")
    return format_html(
        '<rect x="{}%" y="1" width="{}%" height="36" fill="url(#hatch)" stroke="currentColor"/>',
        f"{start:.3f}",
        f"{end - start:.3f}",
    )
