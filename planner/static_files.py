"""Static files of a workshop on a server: compressed, and named by their content."""

from whitenoise.storage import CompressedManifestStaticFilesStorage


class StaticFilesStorage(CompressedManifestStaticFilesStorage):
    """Rewrites the names in `import` too, so that no browser mixes old modules with new ones.

    Only in our own modules: a comment of a library that shows an import is no import.
    """

    support_js_module_import_aggregation = True
    _js_module_import_aggregation_patterns = (
        "flosswright/*.js",
        CompressedManifestStaticFilesStorage._js_module_import_aggregation_patterns[1],
    )
