"""Every pattern that was there before versions were kept gets its first one."""

from django.db import migrations

from patterns.knots import PatternError
from patterns.pattern_file import read_pattern
from patterns.techniques import usual_thread_mm


def first_versions(apps, schema_editor):
    pattern_model = apps.get_model("patterns", "Pattern")
    version_model = apps.get_model("patterns", "PatternVersion")
    for pattern in pattern_model.objects.filter(versions=None):
        pattern.thread_mm = _thread_mm(pattern.text)
        pattern.save(update_fields=["thread_mm"])
        version_model.objects.create(pattern=pattern, number=pattern.version, text=pattern.text)


def _thread_mm(text):
    try:
        return round(usual_thread_mm(read_pattern(text)))
    except PatternError:
        return 0


class Migration(migrations.Migration):
    dependencies = [("patterns", "0002_pattern_workbench")]

    operations = [migrations.RunPython(first_versions, migrations.RunPython.noop)]
