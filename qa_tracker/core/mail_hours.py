"""When mail may go to someone: from the digest hour on, on working days, outside the quiet hours.

What may not go now is delayed and never dropped: the next moment that is neither quiet nor off lets it go.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, datetime

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule_days import SiteDays, zone_of


@dataclass(frozen=True)
class MailHours:
    """The hours of one site.

    Parameters
    ----------
    days
        Time zone, weekend and days off.
    digest_hour
        Local hour from which the day's one mail comes, 0 to 23.
    quiet_from, quiet_until
        Local hours between which no mail comes, the first included, the second not; they may pass midnight. Both
        ``None``: none are quiet.
    """

    days: SiteDays
    digest_hour: int = 7
    quiet_from: int | None = None
    quiet_until: int | None = None

    def __post_init__(self) -> None:
        check_quiet(self.quiet_from, self.quiet_until)

    def is_quiet(self, hour: int) -> bool:
        """Whether an hour of the day is quiet.

        Examples
        --------
        >>> night = MailHours(SiteDays("UTC"), 7, 20, 6)
        >>> [hour for hour in (5, 6, 19, 20, 23, 0) if night.is_quiet(hour)]
        [5, 20, 23, 0]
        """
        if self.quiet_from is None or self.quiet_until is None:
            return False
        if self.quiet_from < self.quiet_until:
            return self.quiet_from <= hour < self.quiet_until
        return hour >= self.quiet_from or hour < self.quiet_until

    @property
    def earliest_hour(self) -> int:
        """Hour from which the day's mail comes: where the digest hour is quiet, the end of the quiet hours.

        Examples
        --------
        >>> MailHours(SiteDays("UTC"), 7, 20, 8).earliest_hour
        8
        """
        if self.quiet_until is not None and self.is_quiet(self.digest_hour):
            return self.quiet_until
        return self.digest_hour

    def may_go(self, at: datetime) -> bool:
        """Whether mail that must not wait for the digest may go at an instant."""
        local = at.astimezone(zone_of(self.days.zone))
        return self.days.is_working(local.date()) and not self.is_quiet(local.hour)

    def digest_day(self, at: datetime) -> date | None:
        """Local day whose digest may go at an instant; ``None`` where it has to wait.

        Examples
        --------
        >>> from datetime import UTC
        >>> hours = MailHours(SiteDays("Europe/London"), 7)
        >>> hours.digest_day(datetime(2025, 6, 2, 6, tzinfo=UTC))
        datetime.date(2025, 6, 2)
        >>> hours.digest_day(datetime(2025, 6, 1, 6, tzinfo=UTC)) is None
        True
        """
        local = at.astimezone(zone_of(self.days.zone))
        if not self.may_go(at) or local.hour < self.earliest_hour:
            return None
        return local.date()


def check_quiet(quiet_from: int | None, quiet_until: int | None) -> None:
    """Refuse quiet hours that are none: one end alone, an hour that is none, or all day long.

    Raises
    ------
    Invalid
        ``site.quiet_half``, ``site.quiet_hour_wrong`` or ``site.quiet_all_day``.
    """
    if quiet_from is None and quiet_until is None:
        return
    if quiet_from is None or quiet_until is None:
        raise Invalid(
            "site.quiet_half", field="quiet_from_hour" if quiet_from is None else "quiet_until_hour"
        )
    for field, hour in (("quiet_from_hour", quiet_from), ("quiet_until_hour", quiet_until)):
        if hour not in range(24):
            raise Invalid("site.quiet_hour_wrong", field=field, hour=hour)
    if quiet_from == quiet_until:
        raise Invalid("site.quiet_all_day", field="quiet_until_hour")
