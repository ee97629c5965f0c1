"""One approval signature over a whole PDF file: PAdES B-B, or B-T where a timestamp authority is given."""

from __future__ import annotations

import io
from datetime import datetime
from typing import Any

from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
from pyhanko.pdf_utils.misc import PdfError
from pyhanko.pdf_utils.reader import PdfFileReader
from pyhanko.sign.fields import SigSeedSubFilter
from pyhanko.sign.general import SigningError
from pyhanko.sign.signers import PdfSignatureMetadata, PdfSigner
from pyhanko.sign.timestamps import TimeStamper

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.seals.keys import SealKey

FIELD = "LeadlineSeal"


class SignerAt(PdfSigner):  # type: ignore[misc, unused-ignore]  # the library is untyped
    """Signs at a given moment: the library would ask the clock of the machine."""

    def __init__(self, moment: datetime, *arguments: Any, **options: Any) -> None:
        super().__init__(*arguments, **options)
        self.moment = moment

    def init_signing_session(self, *arguments: Any, **options: Any) -> Any:
        """Open the session, and put the moment into it."""
        session = super().init_signing_session(*arguments, **options)
        session.system_time = self.moment
        return session


def sign_pdf(
    pdf: bytes,
    key: SealKey,
    *,
    moment: datetime,
    reason: str,
    name: str,
    field: str = FIELD,
    timestamper: TimeStamper | None = None,
) -> bytes:
    """Seal a PDF that bears no signature yet; the seal is invisible and covers every byte of the file.

    ``moment`` must be aware and is what the file claims. It is proven only where a timestamper is given.
    """
    meta = PdfSignatureMetadata(
        field_name=field,
        md_algorithm="sha256",
        reason=reason,
        name=name,
        subfilter=SigSeedSubFilter.PADES,
        certify=False,
    )
    signer = SignerAt(moment, meta, key.signer, timestamper=timestamper)
    try:
        _refuse_signed(pdf)
        sealed = signer.sign_pdf(IncrementalPdfFileWriter(io.BytesIO(pdf)))
    except OSError as error:
        raise Conflict("seal.timestamp_unavailable", problem=str(error)) from error
    except (PdfError, SigningError, ValueError) as error:
        raise Invalid("seal.cannot_sign", problem=str(error)) from error
    return bytes(sealed.getbuffer())


def _refuse_signed(pdf: bytes) -> None:
    """A second signature would make the first cover less than the file."""
    if PdfFileReader(io.BytesIO(pdf)).embedded_signatures:
        raise Conflict("seal.already_signed")
