"""Every address of Flosswright."""

from django.urls import include, path

from planner.views import batches, cards, choices, home, lists, plans, runs, scraps, workshop

urlpatterns = [
    path("", home.home, name="home"),
    path("open-sample/", home.open_sample, name="open_sample"),
    path("start-own/", home.start_own, name="start_own"),
    path("workshop/", workshop.workshop, name="workshop"),
    path("orders/", batches.batch_list, name="batch_list"),
    path("orders/new/", batches.batch_new, name="batch_new"),
    path("orders/<key:pk>/", batches.batch_detail, name="batch_detail"),
    path("orders/<key:pk>/edit/", batches.batch_edit, name="batch_edit"),
    path("orders/<key:pk>/put-back/", batches.lines_put_back, name="lines_put_back"),
    path("orders/<key:pk>/add-list/", lists.list_add, name="list_add"),
    path("orders/<key:pk>/lists/<key:draft_pk>/", lists.list_check, name="list_check"),
    path("orders/<key:pk>/lists/<key:draft_pk>/add/", lists.list_confirm, name="list_confirm"),
    path("orders/<key:pk>/lists/<key:draft_pk>/discard/", lists.list_discard, name="list_discard"),
    path("orders/<key:pk>/choices/", choices.choices, name="choices"),
    path("orders/<key:pk>/choices/row/", choices.choice_row, name="choice_row"),
    path(
        "orders/<key:pk>/choices/substitutes/",
        choices.choice_substitutes,
        name="choice_substitutes",
    ),
    path("orders/<key:pk>/plan/", runs.plan_new, name="plan_new"),
    path("runs/<key:pk>/", runs.run_detail, name="run_detail"),
    path("runs/<key:pk>/stop/", runs.run_stop, name="run_stop"),
    path("plans/<key:pk>/", plans.plan_detail, name="plan_detail"),
    path("plans/<key:pk>/shades/<key:shade_pk>/", plans.plan_shade, name="plan_shade"),
    path("plans/<key:pk>/bracelets/", plans.plan_bracelets, name="plan_bracelets"),
    path("plans/<key:pk>/<slug:sheet>.<slug:ending>", plans.plan_sheet, name="plan_sheet"),
    path("plans/<key:plan_pk>/kinds/<key:pk>/card.pdf", cards.plan_card, name="plan_card"),
    path("b/<key:pk>/", plans.bracelet, name="bracelet"),
    path("stall/from-scraps/", scraps.from_scraps, name="from_scraps"),
    path("stall/from-scraps/order/", scraps.order_scraps, name="order_scraps"),
    path("patterns/<key:pk>/card.pdf", cards.knotting_card, name="knotting_card"),
    path("patterns/", include("patterns.urls")),
    path("shelf/", include("inventory.urls")),
    path("", include("planner.signin.urls")),
]

handler400 = "planner.error_pages.bad_request"
