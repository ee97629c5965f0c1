"""A timestamp authority reached over HTTP (RFC 3161): its word on when a seal existed."""

from __future__ import annotations

import urllib.request

from asn1crypto.tsp import TimeStampReq, TimeStampResp
from pyhanko.sign.timestamps import TimeStamper, TimestampRequestError

from qa_tracker.core.errors import Invalid

QUERY, REPLY = "application/timestamp-query", "application/timestamp-reply"
LARGEST_REPLY = 1_000_000


class Authority(TimeStamper):  # type: ignore[misc, unused-ignore]  # the library is untyped
    """Asks one authority; anything but a whole reply raises TimestampRequestError, an OSError."""

    def __init__(self, url: str, timeout_s: float = 10.0) -> None:
        super().__init__()
        if not url.startswith(("https://", "http://")):
            raise Invalid("seal.timestamp_address", url=url)
        self.url = url
        self.timeout_s = timeout_s

    async def async_request_tsa_response(self, req: TimeStampReq) -> TimeStampResp:
        """Send one request; the caller runs it outside any transaction."""
        asked = urllib.request.Request(self.url, req.dump(), {"Content-Type": QUERY})
        with urllib.request.urlopen(asked, timeout=self.timeout_s) as answer:
            kind = answer.headers.get_content_type()
            body = answer.read(LARGEST_REPLY)
        if kind != REPLY:
            raise TimestampRequestError(f"the authority answered {kind}")
        return TimeStampResp.load(body)
