from django.core.paginator import Paginator
from django.db.models import Count, Sum
from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.views.decorators.http import require_safe
from django.views.decorators.vary import vary_on_headers

from inventory.forms import SearchForm
from inventory.models import Shade, ShelfPiece
from inventory.page_helpers import wants_fragment

SHADES_A_PAGE = 100


@require_safe
@vary_on_headers("HX-Request")
def shelf(request: HttpRequest) -> HttpResponse:
    form = SearchForm(request.GET)
    words = form.cleaned_data["q"] if form.is_valid() else ""
    shades = Shade.objects.for_shelf_page().search(words)
    page = Paginator(shades, SHADES_A_PAGE).get_page(request.GET.get("page"))
    longest = (shade.shelf_mm for shade in page)  # type: ignore[attr-defined]  # annotated
    context = {
        "section": "shelf",
        "form": form,
        "words": words,
        "page": page,
        "longest_mm": max(longest, default=0),
    }
    if wants_fragment(request):
        return render(request, "inventory/_shade_list.html", context)
    totals = ShelfPiece.objects.on_shelf().aggregate(
        pieces=Count("pk"),
        length_mm=Sum("length_mm", default=0),
        shades=Count("lot__shade", distinct=True),
    )
    shade_count = Shade.objects.count()
    context |= {
        "totals": totals,
        "shade_count": shade_count,
        "run_out": shade_count - totals["shades"],
    }
    return render(request, "inventory/shelf.html", context)
