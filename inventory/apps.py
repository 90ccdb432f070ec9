from django.apps import AppConfig
from django.urls import register_converter

from inventory.keys import KeyConverter


class InventoryConfig(AppConfig):
    name = "inventory"
    verbose_name = "Shelf"

    def ready(self) -> None:
        register_converter(KeyConverter, "key")
