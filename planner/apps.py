from django.apps import AppConfig


class PlannerConfig(AppConfig):
    name = "planner"
    verbose_name = "Planner"
