"""Addresses of patterns, colourways, sizes, endings and gauges, under /patterns/."""

from django.urls import path

from patterns.views import (
    analysis,
    colourways,
    comparison,
    editor,
    endings,
    exporting,
    gauges,
    importing,
    library,
    new,
    pattern,
    sizes,
    versions,
)

urlpatterns = [
    path("", library.pattern_list, name="pattern_list"),
    path("new/", new.pattern_new, name="pattern_new"),
    path("new/family/", new.pattern_family, name="pattern_family"),
    path("new/rows/", new.pattern_rows, name="pattern_rows"),
    path("<key:pk>/", pattern.pattern_detail, name="pattern_detail"),
    path("new/draw/", editor.pattern_draw, name="pattern_draw"),
    path("preview/", editor.pattern_preview, name="pattern_preview"),
    path("<key:pk>/edit/", editor.pattern_edit, name="pattern_edit"),
    path("<key:pk>/picture.svg", library.pattern_picture, name="pattern_picture"),
    path("<key:pk>/edit/text/", pattern.pattern_edit_text, name="pattern_edit_text"),
    path("<key:pk>/pattern.toml", pattern.pattern_file, name="pattern_file"),
    path("export.zip", exporting.pattern_export, name="pattern_export"),
    path("import/", importing.pattern_import, name="pattern_import"),
    path("import/<key:pk>/", importing.pattern_import_check, name="pattern_import_check"),
    path(
        "import/<key:pk>/<key:number>.svg",
        importing.pattern_import_picture,
        name="pattern_import_picture",
    ),
    path(
        "import/<key:pk>/discard/", importing.pattern_import_discard, name="pattern_import_discard"
    ),
    path("compare/", comparison.pattern_compare, name="pattern_compare"),
    path("<key:pk>/variants/", analysis.pattern_variants, name="pattern_variants"),
    path("<key:pk>/variants/keep/", analysis.pattern_variant_keep, name="pattern_variant_keep"),
    path("<key:pk>/versions/", versions.pattern_versions, name="pattern_versions"),
    path("<key:pk>/versions/<key:number>/", versions.pattern_version, name="pattern_version"),
    path(
        "<key:pk>/versions/<key:number>/restore/", versions.pattern_restore, name="pattern_restore"
    ),
    path(
        "<key:pk>/versions/<key:number>.toml",
        versions.pattern_version_file,
        name="pattern_version_file",
    ),
    path("<key:pk>/archive/", versions.pattern_archive, name="pattern_archive"),
    path("<key:pk>/bring-back/", versions.pattern_bring_back, name="pattern_bring_back"),
    path("<key:pk>/remove/", pattern.pattern_remove, name="pattern_remove"),
    path("<key:pattern_pk>/colourways/new/", colourways.colourway_new, name="colourway_new"),
    path("colourways/<key:pk>/edit/", colourways.colourway_edit, name="colourway_edit"),
    path("colourways/<key:pk>/remove/", colourways.colourway_remove, name="colourway_remove"),
    path("sizes/", sizes.size_list, name="size_list"),
    path("sizes/new/", sizes.size_new, name="size_new"),
    path("sizes/<key:pk>/edit/", sizes.size_edit, name="size_edit"),
    path("sizes/<key:pk>/remove/", sizes.size_remove, name="size_remove"),
    path("endings/", endings.ending_list, name="ending_list"),
    path("endings/new/", endings.ending_new, name="ending_new"),
    path("endings/<key:pk>/edit/", endings.ending_edit, name="ending_edit"),
    path("endings/<key:pk>/default/", endings.ending_default, name="ending_default"),
    path("endings/<key:pk>/remove/", endings.ending_remove, name="ending_remove"),
    path("gauges/", gauges.gauge_list, name="gauge_list"),
    path("gauges/new/", gauges.gauge_new, name="gauge_new"),
    path("gauges/<key:pk>/edit/", gauges.gauge_edit, name="gauge_edit"),
    path("gauges/<key:pk>/default/", gauges.gauge_default, name="gauge_default"),
    path("gauges/<key:pk>/remove/", gauges.gauge_remove, name="gauge_remove"),
]
