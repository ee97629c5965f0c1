"""Sentences for refused requests of the API: addresses, methods, bodies and tokens."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

REQUESTS: Final = {
    "request.address_unknown": N_("There is no such address here. Look it up in the list of addresses."),
    "request.method_wrong": N_("This address doesn't take %(method)s. It takes: %(allowed)s."),
    "request.malformed": N_(
        "%(field)s is not as this address takes it: %(why)s. Correct it and send it again."
    ),
    "request.not_json": N_("The body is no JSON: %(why)s. Correct it and send it again."),
    "token.refused": N_(
        "The token is missing or not in force. Send one that is, as “Authorization: Bearer ...”, or issue another."
    ),
}
