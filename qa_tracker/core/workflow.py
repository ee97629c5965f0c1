"""The states of a Check, a Device, a Fault and a Dossier: one table each, and all questions asked of them.

A table says which verb leads from which states to which state. Conditions beyond the state (who, when, with which
signature or proof) belong to the commands.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from qa_tracker.core.errors import Conflict


@dataclass(frozen=True)
class Rule:
    """A verb, the states it may be done in, and the state it leads to."""

    verb: str
    sources: tuple[str, ...]
    target: str


@dataclass(frozen=True)
class Workflow:
    """The states of one noun and the rules between them.

    Parameters
    ----------
    noun
        Names the table in refusals: ``"check"`` gives the code ``"check.wrong_state"``.
    initial
        States a new row may start in.
    states
        All states, in the order they are shown in.
    rules
        Transitions. A verb may have several rules, never two for one state.
    """

    noun: str
    initial: tuple[str, ...]
    states: tuple[str, ...]
    rules: tuple[Rule, ...]

    @property
    def verbs(self) -> tuple[str, ...]:
        """Verbs in the order of the rules, each once."""
        return tuple(dict.fromkeys(rule.verb for rule in self.rules))

    @property
    def final(self) -> tuple[str, ...]:
        """States nothing leads out of."""
        left = {source for rule in self.rules for source in rule.sources}
        return tuple(state for state in self.states if state not in left)


def verbs_from(workflow: Workflow, state: str) -> tuple[str, ...]:
    """Verbs that may be done in a state, in the order of the rules."""
    return tuple(rule.verb for rule in workflow.rules if state in rule.sources)


def may_move(workflow: Workflow, state: str, verb: str) -> bool:
    """Tell whether a verb may be done in a state."""
    return verb in verbs_from(workflow, state)


def target(workflow: Workflow, state: str, verb: str) -> str:
    """State a verb leads to; ``Conflict`` where it may not be done in this one.

    Examples
    --------
    >>> target(DEVICE, "at_repair", "return_from_repair")
    'quarantined'
    """
    for rule in workflow.rules:
        if rule.verb == verb and state in rule.sources:
            return rule.target
    allowed = verbs_from(workflow, state)
    raise Conflict(f"{workflow.noun}.wrong_state", state=state, verb=verb, allowed=allowed)


def markdown_table(workflow: Workflow) -> str:
    """Table of the rules as Markdown, one line a rule."""
    lines = [f"| {rule.verb} | {', '.join(rule.sources)} | {rule.target} |" for rule in workflow.rules]
    return "\n".join(["| verb | from | to |", "|---|---|---|", *lines]) + "\n"


def mermaid_diagram(workflow: Workflow) -> str:
    """Mermaid text of the state diagram; verbs between the same two states share an arrow."""
    arrows: dict[tuple[str, str], list[str]] = {}
    for rule in workflow.rules:
        for source in rule.sources:
            arrows.setdefault((source, rule.target), []).append(rule.verb)
    starts = [f"    [*] --> {state}" for state in workflow.initial]
    moves = [f"    {source} --> {end}: {', '.join(verbs)}" for (source, end), verbs in arrows.items()]
    ends = [f"    {state} --> [*]" for state in workflow.final]
    return "\n".join(["stateDiagram-v2", *starts, *moves, *ends]) + "\n"


# An unplanned check begins as started. A missed occurrence is never erased: nothing leads out of missed. "satisfy"
# closes an occurrence by another check that covers it; "withdraw" takes a countersignature back. Excusing a check
# that was sent back excuses the doing again: what was done stays on record.
CHECK: Final = Workflow(
    noun="check",
    initial=("scheduled", "started"),
    states=("scheduled", "started", "submitted", "countersigned", "sent_back", "missed", "excused", "void"),
    rules=(
        Rule("start", ("scheduled",), "started"),
        Rule("submit", ("scheduled", "started", "sent_back"), "submitted"),
        Rule("satisfy", ("scheduled", "started"), "submitted"),
        Rule("amend", ("submitted", "countersigned"), "submitted"),
        Rule("countersign", ("submitted",), "countersigned"),
        Rule("withdraw", ("countersigned",), "submitted"),
        Rule("send_back", ("submitted",), "sent_back"),
        Rule("miss", ("scheduled", "started"), "missed"),
        Rule("excuse", ("scheduled", "started", "sent_back"), "excused"),
        Rule(
            "void",
            ("scheduled", "started", "submitted", "countersigned", "sent_back", "excused"),
            "void",
        ),
    ),
)

CHECK_AWAITED: Final = frozenset({"scheduled", "started", "sent_back"})
"""States in which someone still has to do something before the check counts as done."""

CHECK_DONE: Final = frozenset({"submitted", "countersigned"})
"""States in which the check counts as done."""

# What comes back from repair, or is found again, is quarantined until a check proves it. What comes out of a
# store, back from a loan or back after it was disposed of passes acceptance again, so that no way leads into use
# around a signature. Disposed means out of the group's hands: scrapped, sold, or handed back to its owner.
DEVICE: Final = Workflow(
    noun="device",
    initial=("ordered", "awaiting_acceptance"),
    states=(
        "ordered",
        "awaiting_acceptance",
        "in_use",
        "restricted",
        "quarantined",
        "at_repair",
        "on_loan_in",
        "on_loan_out",
        "stored",
        "lost",
        "disposed",
    ),
    rules=(
        Rule("receive", ("ordered", "stored", "disposed"), "awaiting_acceptance"),
        Rule("accept", ("awaiting_acceptance",), "in_use"),
        Rule("accept_restricted", ("awaiting_acceptance",), "restricted"),
        Rule("borrow_in", ("awaiting_acceptance",), "on_loan_in"),
        Rule("restrict", ("in_use", "restricted"), "restricted"),
        Rule(
            "quarantine",
            (
                "ordered",
                "awaiting_acceptance",
                "in_use",
                "restricted",
                "at_repair",
                "on_loan_in",
                "on_loan_out",
                "stored",
                "lost",
            ),
            "quarantined",
        ),
        Rule("restore", ("quarantined", "restricted"), "in_use"),
        Rule("restore_restricted", ("quarantined",), "restricted"),
        Rule("restore_loan", ("quarantined",), "on_loan_in"),
        Rule(
            "send_to_repair",
            ("awaiting_acceptance", "in_use", "restricted", "quarantined", "on_loan_in", "stored"),
            "at_repair",
        ),
        Rule("return_from_repair", ("at_repair",), "quarantined"),
        Rule("lend_out", ("in_use", "stored"), "on_loan_out"),
        Rule("return_from_loan", ("on_loan_out",), "awaiting_acceptance"),
        Rule("hand_back", ("on_loan_in",), "disposed"),
        Rule("store", ("awaiting_acceptance", "in_use", "restricted"), "stored"),
        Rule(
            "lose",
            (
                "awaiting_acceptance",
                "in_use",
                "restricted",
                "quarantined",
                "at_repair",
                "on_loan_in",
                "on_loan_out",
                "stored",
            ),
            "lost",
        ),
        Rule("find", ("lost",), "quarantined"),
        Rule(
            "dispose",
            (
                "ordered",
                "awaiting_acceptance",
                "in_use",
                "restricted",
                "quarantined",
                "at_repair",
                "on_loan_in",
                "on_loan_out",
                "stored",
                "lost",
            ),
            "disposed",
        ),
    ),
)

DEVICE_USABLE: Final = frozenset({"in_use", "restricted", "on_loan_in"})
"""States in which patients may be scanned with the device (within its restriction, where it has one)."""

# "dismiss" closes what turned out to be no departure; "move" hangs the fault on another part, which any proof
# already under way doesn't cover.
FAULT: Final = Workflow(
    noun="fault",
    initial=("open",),
    states=("open", "awaiting_proof", "closed"),
    rules=(
        Rule("act", ("open",), "open"),
        Rule("act", ("awaiting_proof",), "awaiting_proof"),
        Rule("await_proof", ("open",), "awaiting_proof"),
        Rule("disprove", ("awaiting_proof",), "open"),
        Rule("move", ("open", "awaiting_proof"), "open"),
        Rule("close", ("awaiting_proof",), "closed"),
        Rule("dismiss", ("open",), "closed"),
        Rule("reopen", ("closed",), "open"),
    ),
)

# "release" gives back a dossier whose drawing stopped without a word, once its lease has run out.
DOSSIER: Final = Workflow(
    noun="dossier",
    initial=("frozen",),
    states=("frozen", "rendering", "issued", "failed"),
    rules=(
        Rule("render", ("frozen", "failed"), "rendering"),
        Rule("release", ("rendering",), "frozen"),
        Rule("issue", ("rendering",), "issued"),
        Rule("fail", ("rendering",), "failed"),
    ),
)

WORKFLOWS: Final = {each.noun: each for each in (CHECK, DEVICE, FAULT, DOSSIER)}
