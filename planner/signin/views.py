"""Signing in and out."""

from http import HTTPStatus

from django.contrib import messages
from django.contrib.auth import get_user_model, login, logout, update_session_auth_hash
from django.contrib.auth.decorators import login_not_required
from django.contrib.auth.views import LoginView
from django.db import DatabaseError, connection
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.decorators import method_decorator
from django.views.decorators.cache import never_cache
from django.views.decorators.debug import sensitive_post_parameters
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from planner.signin.forms import SignInForm, password_form
from planner.signin.links import use_link

PASSWORD_BACKEND = "django.contrib.auth.backends.ModelBackend"


@require_GET
@never_cache
@login_not_required
def enter(request: HttpRequest, token: str) -> HttpResponse:
    username = use_link(token)
    user = get_user_model().objects.filter(username=username, is_active=True).first()
    if user is not None:
        login(request, user, backend=PASSWORD_BACKEND)
        response: HttpResponse = redirect("home")
    elif request.user.is_authenticated:
        # The browser opened the link by itself and the maker follows it once more.
        response = redirect("home")
    else:
        response = render(request, "planner/link_used.html", status=HTTPStatus.GONE)
    # Only here: a form on a page with this policy would come back with the Origin "null".
    response["Referrer-Policy"] = "no-referrer"
    return response


@method_decorator([login_not_required, never_cache], name="dispatch")
class SignIn(LoginView):
    """Django's own view: it checks where `next` leads, and takes a signed-in visitor onward."""

    form_class = SignInForm
    template_name = "planner/sign_in.html"
    redirect_authenticated_user = True


sign_in = SignIn.as_view()


@require_POST
def sign_out(request: HttpRequest) -> HttpResponse:
    logout(request)
    messages.success(request, "You are signed out.")
    return redirect("sign_in")


@require_http_methods(["GET", "POST"])
@sensitive_post_parameters()
@never_cache
def change_password(request: HttpRequest) -> HttpResponse:
    assert request.user.is_authenticated
    form = password_form(request.user, request.POST if request.method == "POST" else None)
    if request.method == "POST" and form.is_valid():
        update_session_auth_hash(request, form.save())
        messages.success(request, "Your password is set. Other devices must sign in anew.")
        return redirect("home")
    return render(request, "planner/set_password.html", {"form": form, "section": "workshop"})


@require_GET
@never_cache
@login_not_required
def health(request: HttpRequest) -> HttpResponse:
    try:
        with connection.cursor() as cursor:
            cursor.execute("SELECT 1")
    except DatabaseError:
        return HttpResponse(
            "no database\n", content_type="text/plain", status=HTTPStatus.SERVICE_UNAVAILABLE
        )
    return HttpResponse("ok\n", content_type="text/plain")
