"""Keys of rows in addresses."""

from django.urls.converters import IntConverter


class KeyConverter(IntConverter):
    """As many digits as every database's key holds; Django's own takes more and overflows."""

    regex = "[0-9]{1,18}"
