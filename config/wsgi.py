"""The web application as a WSGI callable."""

from __future__ import annotations

import os

from django.core.wsgi import get_wsgi_application

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "config.settings")

application = get_wsgi_application()

from qa_tracker.services.start import require_guards  # noqa: E402  models need Django set up first

require_guards()
