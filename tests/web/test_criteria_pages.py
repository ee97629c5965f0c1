"""The pages of criteria: sets and editions, differences, the next edition, what it would have said, ending an adoption."""

from __future__ import annotations

import copy
import html
import re
import uuid

import pytest
from django.db import transaction
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.core.next_edition import typed_places
from qa_tracker.records import ledger
from qa_tracker.records.models import Adoption, CriteriaSet
from qa_tracker.records.queries.library import set_document
from qa_tracker.services import checks, library, next_edition
from tests import builders

REMEDIAL = "DROP.criterion.remedial.absolute"


@pytest.fixture(scope="module")
def ward_of_the_module(engine, django_db_setup, django_db_blocker, tmp_path_factory):
    """A ward with one check of one dark element; what a test does to it is undone."""
    with django_db_blocker.unblock(), transaction.atomic():
        ward = builders.ward()
        builders.submitted(ward.check, ward.technician, dark_elements="1")
        yield ward
        transaction.set_rollback(True)


@pytest.fixture
def ward(ward_of_the_module):
    with transaction.atomic():
        yield copy.deepcopy(ward_of_the_module)
        transaction.set_rollback(True)


@pytest.fixture
def page(ward):
    """What the physicist reads at an address, blanks made one."""
    browser = builders.signed_in(ward.physicist)

    def read(name, *args, status=200, **query):
        return words(browser.get(reverse(name, args=args), query), status)

    return read


def words(answer, status=200):
    assert answer.status_code == status, answer.content.decode()[-2000:]
    text = re.sub(r"<[^>]+>", " ", answer.content.decode().partition("<main")[2])
    return re.sub(r"\s+", " ", html.unescape(text))


def known(code="dropout", edition="2014"):
    return CriteriaSet.objects.get(code=code, edition=edition)


def typed(**texts):
    return (
        typed_places(set_document(known().pk))
        | {"edition": "2027", REMEDIAL: "1", "DROP.source": "Ours"}
        | texts
    )


def published(ward, **texts):
    return next_edition.publish_next(before=known(), typed=typed(**texts), actor=ward.physicist, at=now())


def test_list_names_editions_newest_first_and_where_each_is_in_force(ward, page):
    published(ward)
    text = page("criteria")
    assert (
        "Edition 2027 Contiguous dead elements what changed in edition 2027 1 level confirmed, 1 level "
        "by local decision Not in force" in text
    )
    assert text.index("Edition 2027") < text.index("Edition 2014")
    assert "The whole group adopted by Maren Oduya on" in text


def test_set_not_adopted_that_is_from_memory_asks_for_a_comparison(ward, page):
    library.end_criteria(
        adoption=Adoption.objects.get(criteria_set__code="tg1").uid,
        reason="Not ours",
        actor=ward.physicist,
        at=now(),
    )
    assert "From memory: compare with your own copy before adopting" in page("criteria")
    assert "compare with your own copy of the source" in page("criteria-set", known("tg1", "1998").uid)


def test_set_says_of_each_limit_shape_medium_method_and_standing(page):
    text = page("criteria-set", known("tg1", "1998").uid)
    assert "Loss of more than 6 mm remedial, more than 10 mm suspension, against the baseline" in text
    assert (
        "worsening against the baseline, one way only (shape D), in mm, on a phantom, by eye or from an image"
        in text
    )
    assert "Remedial level from memory: compare with your own copy; the source calls it “action”" in text
    assert "1 level confirmed, 8 levels from memory." in text


def test_differences_show_both_editions_key_by_key(ward, page):
    text = page("criteria-differences", old=known().uid, new=published(ward, **{"DROP.source": "Ours"}).uid)
    assert "1 criterion changed." in text
    assert (
        "The limit At least 2 remedial, at least 4 suspension At least 1 remedial, at least 4 suspension"
        in text
    )
    assert "Remedial level, absolute 2 1" in text
    assert "Ours" in text


def test_two_sets_are_laid_side_by_side_by_what_procedures_name(page):
    text = page("criteria-differences", old=known("tg1", "1998").uid, new=known("tg128", "2008").uid)
    assert "Only in tg1 1998: Depth of penetration" in text
    assert "These are two sets." in text
    assert "Choose" not in page("criteria-differences")
    assert "choose an edition" in page("criteria-differences")


@pytest.mark.parametrize("uid", ["x", str(uuid.UUID(int=7))])
def test_differences_with_an_edition_that_is_not_there_are_not_found(page, uid):
    page("criteria-differences", old=uid, new=known().uid, status=404)


def test_next_edition_is_published_and_leads_to_what_changed(ward):
    browser = builders.signed_in(ward.physicist)
    answer = browser.post(reverse("criteria-next", args=[known().uid]), typed())
    made = known(edition="2027")
    assert answer.headers["Location"] == f"{reverse('criteria-differences')}?old={known().uid}&new={made.uid}"
    assert "It has no force until it is adopted" in words(browser.get(answer.headers["Location"]))


def test_next_edition_when_refused_keeps_what_was_typed_beside_each_refusal(ward):
    browser = builders.signed_in(ward.physicist)
    given = typed(**{"edition": "2014", REMEDIAL: "two <b>", "DROP.note": "kept &"})
    answer = browser.post(reverse("criteria-next", args=[known().uid]), given)
    text = answer.content.decode()
    assert (answer.status_code, CriteriaSet.objects.filter(code="dropout").count()) == (422, 1)
    assert 'value="two &lt;b&gt;"' in text
    assert "kept &amp;" in text
    assert f'id="refusal_{REMEDIAL}"' in text
    assert 'id="refusal_edition"' in text
    assert '<details class="limit-fields" id="id_DROP.criterion" open>' in text


def test_limits_that_contradict_are_refused_at_their_criterion(ward):
    answer = builders.signed_in(ward.physicist).post(
        reverse("criteria-next", args=[known().uid]), typed(**{REMEDIAL: "5"})
    )
    assert 'id="refusal_DROP.criterion"' in answer.content.decode()


def test_preview_shows_what_would_differ_and_publishes_nothing(ward):
    before = ledger.state()
    answer = builders.signed_in(ward.physicist).post(
        reverse("criteria-next", args=[known().uid]), typed() | {"preview": "1"}
    )
    assert "1 criterion changed. Nothing is published yet." in words(answer)
    assert ledger.state() == before


def test_next_edition_is_for_physicists_of_the_group(ward):
    local = builders.person(ward.admin, "local", "physicist", ward.site)
    for person in (ward.technician, ward.admin, local):
        browser = builders.signed_in(person)
        assert browser.get(reverse("criteria-next", args=[known().uid])).status_code == 403
        assert "Write the next edition" not in words(browser.get(reverse("criteria-set", args=[known().uid])))


def test_what_if_asks_first_and_then_tells_counts_and_readings(ward, page):
    made = published(ward)
    assert "would change" not in page("criteria-what-if", made.uid)
    text = page("criteria-what-if", made.uid, asked="yes")
    assert "The one verdict would change" in text
    assert "Contiguous dead elements DROP conforming remedial 1" in text
    assert "the remedial level begins at 2: conforming." in text
    assert "the remedial level begins at 1: remedial." in text


def test_what_if_is_for_whoever_sees_criteria_and_within_their_sight(ward):
    made, bay = published(ward), builders.site(ward.admin, "KB", "Kestrel Bay")
    auditor = builders.person(ward.admin, "fair", "auditor", None)
    stranger = builders.person(ward.admin, "sunniva", "physicist", bay)
    told = {
        person.username: words(builders.signed_in(person).get(reverse("criteria-what-if", args=[made.uid]), {"asked": "1"}))
        for person in (ward.technician, auditor, stranger)
    }  # fmt: skip
    assert all("The one verdict would change" in told[name] for name in ("castellane", "fair"))
    assert "No stored verdict was given" in told["sunniva"]
    assert "C5-2207" not in told["sunniva"]


@pytest.mark.parametrize(
    ("query", "status", "sentence"),
    [
        ({"serial": "C5-2207"}, 200, "The one verdict would change"),
        ({"serial": "nothing"}, 422, "No device in your sight has the serial number “nothing”"),
        ({"since": "2999-01-01"}, 200, "No stored verdict was given"),
        ({"until": "31 May"}, 422, "“31 May” is no day"),
        ({"site": "AG", "page": "99"}, 200, "The one verdict would change"),
        ({"site": "XX"}, 404, ""),
    ],
)
def test_what_if_is_asked_over_a_site_a_device_and_a_time(ward, page, query, status, sentence):
    assert sentence in page("criteria-what-if", published(ward).uid, asked="yes", status=status, **query)


def test_what_if_costs_the_same_with_more_readings(ward, page, django_assert_max_num_queries):
    made = published(ward)
    with django_assert_max_num_queries(40) as few:
        page("criteria-what-if", made.uid, asked="yes")
    for _ in range(3):
        check = checks.open_unplanned(
            device=ward.probe.uid, procedure=builders.MONTHLY, actor=ward.technician, at=now()
        )
        builders.submitted(check, ward.technician, dark_elements="1")
    with django_assert_max_num_queries(len(few)):
        assert "4 of 4 verdicts would change" in page("criteria-what-if", made.uid, asked="yes")


def test_adoption_is_ended_with_a_reason(ward):
    browser = builders.signed_in(ward.physicist)
    address = reverse("criteria-end", args=[Adoption.objects.get(criteria_set__code="dropout").uid])
    assert address in browser.get(reverse("criteria-set", args=[known().uid])).content.decode()
    assert browser.post(address, {"reason": " "}).status_code == 422
    assert browser.post(address, {"reason": "From memory"}).headers["Location"].endswith(f"{known().uid}/")
    assert browser.get(address).status_code == 404


def test_adoption_of_another_site_is_not_there_to_be_ended(ward):
    bay = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "sunniva", "physicist", bay)
    own = library.adopt_criteria(
        criteria_set=published(ward), site=ward.site, remark="", actor=ward.physicist, at=now()
    )
    group = Adoption.objects.get(criteria_set=known())
    browser = builders.signed_in(stranger)
    statuses = [
        browser.get(reverse("criteria-end", args=[uid])).status_code
        for uid in (own.uid, uuid.uuid4(), group.uid)
    ]
    assert statuses == [404, 404, 403]
