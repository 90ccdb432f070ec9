"""What every template knows."""

from django.http import HttpRequest

from inventory.models import Workshop


def workshop(request: HttpRequest) -> dict[str, object]:
    """One small query a page: unit, currency and the workshop's name."""
    if not getattr(request, "user", None) or not request.user.is_authenticated:
        return {"workshop": None}
    return {"workshop": Workshop.current()}
