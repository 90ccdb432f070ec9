"""Addresses of the shelf, under /shelf/."""

from django.urls import path

from inventory.views import put_ups, shades, shelf, thread

urlpatterns = [
    path("", shelf.shelf, name="shelf"),
    path("shades/new/", shades.shade_new, name="shade_new"),
    path("shades/<key:pk>/", shades.shade_detail, name="shade_detail"),
    path("shades/<key:pk>/edit/", shades.shade_edit, name="shade_edit"),
    path("shades/<key:pk>/remove/", shades.shade_remove, name="shade_remove"),
    path("shades/<key:pk>/thread/", thread.thread_add, name="thread_add"),
    path("shades/<key:pk>/thread/undo/", thread.thread_add_undo, name="thread_add_undo"),
    path("thread/<key:pk>/edit/", thread.thread_edit, name="thread_edit"),
    path("thread/<key:pk>/remove/", thread.thread_remove, name="thread_remove"),
    path("thread/<key:pk>/put-back/", thread.thread_put_back, name="thread_put_back"),
    path("put-ups/", put_ups.put_up_list, name="put_up_list"),
    path("put-ups/new/", put_ups.put_up_new, name="put_up_new"),
    path("put-ups/<key:pk>/edit/", put_ups.put_up_edit, name="put_up_edit"),
    path("put-ups/<key:pk>/remove/", put_ups.put_up_remove, name="put_up_remove"),
]
