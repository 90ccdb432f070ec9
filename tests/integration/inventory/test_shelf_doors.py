"""Every address of the shelf: who may come in, and by which method."""

import pytest
from django.test import Client
from django.urls import reverse

from inventory.models import Workshop
from inventory.urls import urlpatterns
from tests.factories import make_put_up, make_shade, put_thread

pytestmark = pytest.mark.django_db
READ_ONLY = {"shelf", "shade_detail", "put_up_list"}
FORMS = {"shade_new", "shade_edit", "thread_edit", "put_up_new", "put_up_edit"}
POST_ONLY = {
    "shade_remove", "thread_add", "thread_add_undo", "thread_remove", "thread_put_back",
    "put_up_remove",
}  # fmt: skip
WITHOUT_NUMBER = {"shelf", "shade_new", "put_up_list", "put_up_new"}
GONE_IS_FINE = {"shade_remove", "put_up_remove"}  # they say that it was removed already


def url_of(name: str, pk: int = 1) -> str:
    return reverse(name) if name in WITHOUT_NUMBER else reverse(name, args=[pk])


def test_no_address_is_left_out_of_these_tests() -> None:
    assert {pattern.name for pattern in urlpatterns} == READ_ONLY | FORMS | POST_ONLY


@pytest.mark.parametrize("name", sorted(READ_ONLY | FORMS | POST_ONLY))
def test_signed_out_is_sent_to_sign_in(client: Client, workshop: Workshop, name: str) -> None:
    method = client.post if name in POST_ONLY else client.get
    response = method(url_of(name))
    assert response.status_code == 302
    assert response["Location"].startswith(reverse("sign_in"))


@pytest.mark.parametrize("name", sorted(POST_ONLY))
def test_changes_are_not_made_by_get(maker: Client, name: str) -> None:
    assert maker.get(url_of(name)).status_code == 405


@pytest.mark.parametrize("name", sorted(READ_ONLY))
def test_pages_take_no_post(maker: Client, name: str) -> None:
    assert maker.post(url_of(name)).status_code == 405


@pytest.mark.parametrize("name", sorted(READ_ONLY | FORMS | POST_ONLY))
def test_no_address_takes_delete(maker: Client, name: str) -> None:
    assert maker.delete(url_of(name)).status_code == 405


@pytest.mark.parametrize("pk", [999, 10**30])
@pytest.mark.parametrize("name", sorted((READ_ONLY | FORMS | POST_ONLY) - WITHOUT_NUMBER))
def test_unknown_number_is_not_found(maker: Client, name: str, pk: int) -> None:
    address = url_of(name, 999).replace("999", str(pk))
    response = maker.post(address) if name in POST_ONLY else maker.get(address)
    assert response.status_code == (302 if name in GONE_IS_FINE and pk == 999 else 404)


@pytest.mark.parametrize("name", sorted(FORMS | POST_ONLY))
def test_changes_need_the_forms_own_mark(workshop: Workshop, name: str) -> None:
    from django.contrib.auth import get_user_model

    make_shade()
    make_put_up()
    strict = Client(enforce_csrf_checks=True)
    strict.force_login(get_user_model().objects.create_user("owner"))
    assert strict.post(url_of(name), {}).status_code == 403


@pytest.mark.parametrize("name", sorted(READ_ONLY | FORMS))
def test_pages_hold_no_inline_script_or_style(maker: Client, name: str) -> None:
    shade = make_shade()
    (piece,) = put_thread(shade, 500)
    put_up = make_put_up()
    numbers = {"thread_edit": piece.pk, "put_up_edit": put_up.pk}
    html = maker.get(url_of(name, numbers.get(name, shade.pk))).content.decode()
    assert " style=" not in html
    assert "<style" not in html
    assert " onclick=" not in html
    assert "hx-on" not in html


@pytest.mark.parametrize("name", sorted(READ_ONLY | FORMS))
def test_pages_open_before_there_is_a_workshop(
    maker: Client, workshop: Workshop, name: str
) -> None:
    shade = make_shade()
    (piece,) = put_thread(shade, 500)
    put_up = make_put_up()
    workshop.delete()
    numbers = {"thread_edit": piece.pk, "put_up_edit": put_up.pk}
    response = maker.get(url_of(name, numbers.get(name, shade.pk)))
    assert response.status_code in {200, 302}
