"""The dossier as another program reads it: text, fonts, pages, outline, title; and always the same bytes."""

from __future__ import annotations

import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pytest
from dossier_content import CHECKS, dossier

from qa_tracker.core.errors import Invalid
from qa_tracker.documents.content import Reading
from qa_tracker.documents.device_dossier import device_dossier_pdf
from qa_tracker.documents.labels import ENGLISH

HERE = Path(__file__).parent


@pytest.fixture(scope="module")
def pdf():
    return device_dossier_pdf(dossier())


SAID = [
    "Fjellet C5 convex probe, serial LV-20931",
    "Tarnwater Hospitals Group",
    "Penetration lost 6.0 mm: exactly at the remedial level, which conforms.",
    "145.4 mm",
    "110 %",
    "< 3 mm",
    "not assessable",
    "Doppler velocity: flow object on loan to Kestrel Bay",
    "measured 2024-05-14 09:31 +00:00 · recorded 2024-05-14 16:05 +00:00",
    "TG1-PEN, edition 1: 10 mm confirmed, 6 mm from memory: compare with your own copy before adopting",
    "Goodsitt et al. 1998, Med Phys 25(8):1385-1406",
    "Hywel Dragić, sonographer",
    "restored to use",
    "In theatre on two attempts.",
    "9f" * 32,
    "Conforming is not a statement that a scan is safe or diagnostic.",
]


def test_text_when_extracted_says_what_the_content_says(pdf, poppler):
    text = " ".join(poppler("pdftotext", pdf, "-layout").split())
    assert [sentence for sentence in SAID if sentence not in text] == []


def test_recorded_moment_when_the_same_minute_is_not_repeated(pdf, poppler):
    assert poppler("pdftotext", pdf, "-layout").count("recorded 20") == 3


def test_hebrew_name_when_extracted_is_in_logical_order(pdf, poppler):
    assert "נועה ברק" in poppler("pdftotext", pdf)


def test_fonts_when_listed_are_all_embedded_with_a_unicode_map(pdf, poppler):
    rows = poppler("pdffonts", pdf).splitlines()[2:]
    assert rows
    assert all(row.split()[-5:-2] == ["yes", "yes", "yes"] for row in rows)


def test_pages_when_drawn_count_themselves(pdf, poppler):
    count = next(line for line in poppler("pdfinfo", pdf).splitlines() if line.startswith("Pages:")).split()[
        1
    ]
    text = poppler("pdftotext", pdf)
    assert all(f"Page {number} of {count}" in text for number in range(1, int(count) + 1))


def test_document_when_described_has_title_author_and_paper_size(pdf, poppler):
    described = poppler("pdfinfo", pdf)
    assert "Quality record of a device: Fjellet C5 convex probe, serial LV-20931" in described
    assert "Tarnwater Hospitals Group" in described
    assert "(A4)" in described


def test_outline_when_opened_leads_to_chapters_and_checks(pdf):
    for title in (b"(Checks)", b"(Faults)", b"(Ledger)", b"(2025-05-14 Quarterly mechanical and uniformity)"):
        assert title in pdf


def test_streams_when_written_are_plain(pdf):
    assert b"/FlateDecode" not in pdf.split(b"/FontFile2")[0]
    assert b"BT" in pdf


def test_bytes_when_drawn_twice_are_the_same(pdf):
    assert device_dossier_pdf(dossier()) == pdf


def test_bytes_when_drawn_by_another_process_are_the_same(pdf, tmp_path):
    program = (
        "import sys; sys.path[:0] = sys.argv[2:]\n"
        "from dossier_content import dossier\n"
        "from qa_tracker.documents.device_dossier import device_dossier_pdf\n"
        "open(sys.argv[1], 'wb').write(device_dossier_pdf(dossier()))\n"
    )
    out = tmp_path / "again.pdf"
    command = [sys.executable, "-c", program, str(out), str(HERE), str(HERE.parents[1])]
    subprocess.run(command, check=True, env={"PYTHONHASHSEED": "7"})
    assert out.read_bytes() == pdf


def test_every_page_when_the_key_is_for_demonstration_says_so(poppler):
    pages = poppler("pdftotext", device_dossier_pdf(dossier(demo_key=True))).rstrip("\f").split("\f")
    assert len(pages) > 1
    assert all(ENGLISH["demo_key"] in page for page in pages)


def test_no_page_when_the_key_is_the_institutions_mentions_a_demonstration(pdf, poppler):
    assert "demonstration" not in poppler("pdftotext", pdf)


def test_words_when_labels_are_in_another_language_come_from_the_labels(poppler):
    german = {key: f"«{text}»" for key, text in ENGLISH.items()} | {"page": "Seite {n} von {m}"}
    text = poppler("pdftotext", device_dossier_pdf(dossier(labels=german)))
    assert "Seite 1 von" in text
    assert "Page 1 of" not in text
    assert "«Faults»" in text


def test_dossier_when_nothing_is_on_record_says_so(poppler):
    bare = dossier(checks=(), faults=(), baselines=(), placements=(), plans=(), people=(), identity=())
    text = poppler("pdftotext", device_dossier_pdf(bare))
    assert ENGLISH["no_checks"] in text
    assert ENGLISH["no_faults"] in text


def test_check_when_nothing_was_done_names_no_edition(poppler):
    missed = replace(CHECKS[-1], edition="", readings=())
    text = poppler("pdftotext", device_dossier_pdf(dossier(checks=(missed,))))
    assert "Monthly in-air and visual\n" in text
    assert "Monthly in-air and visual, edition" not in text


def test_limit_when_it_only_judged_beside_another_is_among_those_used(poppler):
    (reading, *_rest) = CHECKS[0].readings
    beside = replace(reading.criterion, identifier="PEN-LOCAL", words="loss of 4 mm in a month")
    told = replace(CHECKS[0], readings=(replace(reading, further=(beside,)),))
    text = poppler("pdftotext", device_dossier_pdf(dossier(checks=(told,))))
    assert "loss of 4 mm in a month" in text
    assert "PEN-LOCAL" in text


def test_unsigned_check_when_drawn_says_so(poppler):
    text = poppler("pdftotext", device_dossier_pdf(dossier(checks=(replace(CHECKS[0], signatures=()),))))
    assert "Not signed." in text


def test_remark_when_too_long_for_its_column_is_set_across_the_page(poppler):
    remark = Reading("Remarks", "scratched near the strain relief, as it was before", "conforming", "")
    pdf = device_dossier_pdf(dossier(checks=(replace(CHECKS[0], readings=(remark,)),)))
    assert remark.value in poppler("pdftotext", pdf)


def test_time_line_when_every_check_has_a_verdict_explains_no_stroke(poppler):
    text = poppler("pdftotext", device_dossier_pdf(dossier(checks=CHECKS[:3])))
    assert ENGLISH["stroke_explained"] not in text


def test_continued_check_when_it_runs_over_is_named_again(pdf, poppler):
    assert "2024-05-14 Quarterly mechanical and uniformity, continued" in poppler("pdftotext", pdf)


def test_dossier_when_a_label_is_missing_is_not_drawn():
    with pytest.raises(Invalid) as refusal:
        device_dossier_pdf(dossier(labels={}))
    assert refusal.value.code == "dossier.label_missing"
