"""Every table, by noun. The ledger's table is imported as a module, never re-exported: its door is records/ledger.py."""

from qa_tracker.records.models import ledger as ledger
from qa_tracker.records.models.baselines import Baseline, BaselineSetup
from qa_tracker.records.models.checks import (
    Check,
    CheckClock,
    CheckPlan,
    Draft,
    FurtherVerdict,
    NotTested,
    Reading,
    Submission,
    Verdict,
)
from qa_tracker.records.models.devices import (
    Aperture,
    Condition,
    Device,
    Placement,
    ProbeFacts,
    ScannerFacts,
)
from qa_tracker.records.models.duties import Leave, PlanException, PlanRule, Team, TeamMember
from qa_tracker.records.models.evidence import Dossier, Fault, FaultAction, Signature
from qa_tracker.records.models.library import (
    Adoption,
    CriteriaSet,
    Criterion,
    Edition,
    EditionDraft,
    Measurand,
    Procedure,
    StatedUncertainty,
)
from qa_tracker.records.models.notices import (
    Digest,
    DigestTry,
    Heartbeat,
    LadderRung,
    Notice,
    NoticeHold,
    NoticeMail,
    NoticeSeen,
    SweepGap,
)
from qa_tracker.records.models.objects import Instrument, TestObject
from qa_tracker.records.models.people import ApiToken, Credential, FeedToken, Person, RoleGrant
from qa_tracker.records.models.sites import Holiday, Location, Pool, PoolMember, Site
from qa_tracker.records.models.versions import Version

__all__ = [
    "Adoption", "Aperture", "ApiToken", "Baseline", "BaselineSetup", "Check", "CheckClock", "CheckPlan",
    "Condition", "Credential", "CriteriaSet", "Criterion", "Device", "Digest", "DigestTry", "Dossier",
    "Draft", "Edition", "EditionDraft", "Fault", "FaultAction", "FeedToken", "FurtherVerdict", "Heartbeat",
    "Holiday", "Instrument", "LadderRung", "Leave", "Location", "Measurand", "NotTested", "Notice",
    "NoticeHold", "NoticeMail", "NoticeSeen", "Person", "Placement", "PlanException", "PlanRule", "Pool",
    "PoolMember", "ProbeFacts", "Procedure", "Reading", "RoleGrant", "ScannerFacts", "Signature", "Site",
    "StatedUncertainty", "Submission", "SweepGap", "Team", "TeamMember", "TestObject", "Verdict", "Version",
]  # fmt: skip
