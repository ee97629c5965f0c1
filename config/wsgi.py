"""The web application as a WSGI callable."""

from __future__ import annotations

import os

from django.core.wsgi import get_wsgi_application

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "config.settings")

application = get_wsgi_application()

from django.utils.timezone import now  # noqa: E402  models need Django set up first

from qa_tracker.services.start import begin  # noqa: E402  the same

begin(at=now())
