"""Forms for name and password, with the limits that Django leaves to the database."""

from typing import Any

from django import forms
from django.contrib.auth.forms import AuthenticationForm, PasswordChangeForm, SetPasswordForm
from django.contrib.auth.models import User
from django.core.validators import MaxLengthValidator

LONGEST_PASSWORD = 500


class SignInForm(AuthenticationForm):
    """Long names are refused here: PostgreSQL would refuse to note the failed try."""

    error_messages = {
        **AuthenticationForm.error_messages,
        "invalid_login": "This name and password do not belong together. Capitals matter.",
    }

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["username"].label = "Name"
        self.fields["username"].validators.append(
            MaxLengthValidator(150, "A name has at most 150 characters.")
        )
        _limit_password(self.fields["password"])


def _limit_password(field: forms.Field) -> None:
    field.validators.append(
        MaxLengthValidator(
            LONGEST_PASSWORD, f"A password has at most {LONGEST_PASSWORD} characters."
        )
    )


def password_form(user: User, data: Any = None) -> SetPasswordForm:
    """The first password needs no old one: a link opened this session."""
    form = (
        PasswordChangeForm(user, data)
        if user.has_usable_password()
        else SetPasswordForm(user, data)
    )
    for field in form.fields.values():
        _limit_password(field)
    return form
