from django.urls import path

from planner.signin import views

urlpatterns = [
    path("enter/<str:token>/", views.enter, name="enter"),
    path("sign-in/", views.sign_in, name="sign_in"),
    path("sign-out/", views.sign_out, name="sign_out"),
    path("password/", views.change_password, name="change_password"),
    path("healthz", views.health, name="health"),
]
