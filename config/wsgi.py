"""The web application as a WSGI callable."""

from __future__ import annotations

import os

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "config.settings")

from django.core.wsgi import get_wsgi_application

from qa_tracker.services.start import require_guards

application = get_wsgi_application()
require_guards()
