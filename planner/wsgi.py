"""For a server of its own: `gunicorn planner.wsgi`."""

import os

from django.core.wsgi import get_wsgi_application

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "planner.settings.production")
application = get_wsgi_application()
