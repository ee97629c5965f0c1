"""The bulk door: commands of the past leave the rows and leaves that they would have left live."""

from __future__ import annotations

import datetime as dt
import json

from django.apps import apps
from django.db import transaction
from row_maker import AT, make

from qa_tracker.core import merkle
from qa_tracker.records import ledger
from qa_tracker.records.models import Holiday, Location, Site, Version
from qa_tracker.records.models.base import Fact
from qa_tracker.records.rows import digest_of

Leaf = apps.get_model("leadline", "Leaf")
DAY = dt.timedelta(days=1)


def opened(act):
    site = act.insert(Site(code="AG", name="Aldermoor", time_zone="Europe/London"))
    act.insert(Holiday(site=site, day_on=AT.date(), name="Fair"))
    act.about(site, site=site)
    act.tell({"name": "Aldermoor"})
    return site


def renamed(act, site, name):
    act.about(site, site=site)
    act.change(site, name=name)
    act.tell({"name": name})


def roomed(act, site):
    act.insert(Location(site=site, name="Room 2"))
    act.about(site)


def live():
    with ledger.command("site.opened", actor=None, at=AT) as act:
        site = opened(act)
    for number, name in enumerate(("second", "third"), start=1):
        with ledger.command("site.renamed", actor=None, at=AT + number * DAY) as act:
            renamed(act, site, name)
    with ledger.command("room.opened", actor=None, at=AT + 3 * DAY) as act:
        roomed(act, site)


def past():
    with ledger.history("imported") as batch:
        site = opened(batch.act("site.opened", actor=None, at=AT))
        for number, name in enumerate(("second", "third"), start=1):
            renamed(batch.act("site.renamed", actor=None, at=AT + number * DAY), site, name)
        roomed(batch.act("room.opened", actor=None, at=AT + 3 * DAY), site)


def told():
    """What the leaves say, but for what is made anew each time: identifiers, so digests, and the origin."""
    text = json.dumps([json.loads(leaf.content) for leaf in Leaf.objects.order_by("seq")])
    leaves = json.loads(text.replace(str(Site.objects.get().uid), "the site"))
    for leaf in leaves:
        del leaf["uid"], leaf["origin"]
        leaf["rows"] = {name: digest["n"] for name, digest in leaf["rows"].items()}
    return leaves


def test_leaves_of_the_past_say_what_live_ones_say(db):
    with transaction.atomic():
        live()
        said_live = told()
        transaction.set_rollback(True)
    past()
    assert told() == said_live


def test_row_digests_of_the_past_are_those_of_the_rows(db):
    past()
    for leaf in Leaf.objects.all():
        for name, digest in json.loads(leaf.content)["rows"].items():
            table, _, form = name.partition("/")
            model = apps.get_model("leadline", table)
            assert issubclass(model, Fact)
            assert digest == digest_of(model.objects.filter(leaf_id=leaf.uid), int(form))


def test_leaves_are_marked_and_ordered_by_their_moments_when_acts_were_begun_in_any_order(db):
    with ledger.history("demo") as batch:
        for days in (2, 0, 1):
            batch.act(f"day.{days}", actor=None, at=AT + days * DAY)
    leaves = list(Leaf.objects.order_by("seq"))
    assert [leaf.kind for leaf in leaves] == ["day.0", "day.1", "day.2"]
    assert {json.loads(leaf.content)["origin"] for leaf in leaves} == {"demo"}
    assert ledger.state() == (3, merkle.root([bytes(leaf.leaf_hash) for leaf in leaves]))


def test_live_commands_go_on_after_the_past(committed_db):
    make(Site)
    past()
    make(Holiday)
    assert list(Leaf.objects.order_by("seq").values_list("seq", flat=True)) == list(range(6))
    assert Site.objects.count() == 3


def test_noun_that_stood_before_is_changed_by_the_past(committed_db):
    site = make(Site)
    with ledger.history("imported") as batch:
        renamed(batch.act("site.renamed", actor=None, at=AT), site, "second")
        renamed(batch.act("site.renamed", actor=None, at=AT + DAY), site, "third")
    now = Site.objects.get(pk=site.pk)
    versions = Version.objects.filter(noun="site", subject_id=site.pk).order_by("number")
    assert (now.name, now.version, now.leaf_id) == ("third", 3, versions.last().leaf_id)
    assert [json.loads(version.columns)["name"] for version in versions][1:] == ["second", "third"]
