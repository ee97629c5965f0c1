"""A realistic device dossier: an invented convex probe that slowly loses penetration and is replaced."""

from __future__ import annotations

from dataclasses import replace

from qa_tracker.documents.content import (
    Action,
    Aperture,
    Baseline,
    Check,
    Criterion,
    DeviceDossier,
    Fault,
    LedgerState,
    Line,
    Person,
    Placement,
    Plan,
    Reading,
    Row,
    Signature,
    SoftwareVersion,
    Untested,
)
from qa_tracker.documents.labels import ENGLISH

MEMORY = "from memory: compare with your own copy before adopting"
PENETRATION = Criterion(
    "TG1-PEN",
    "1",
    "loss of penetration against the baseline: remedial beyond 6 mm, suspension beyond 10 mm",
    "Goodsitt et al. 1998, Med Phys 25(8):1385-1406",
    f"10 mm confirmed, 6 mm {MEMORY}",
)
UNIFORMITY = Criterion(
    "TG1-UNIF",
    "1",
    "uniformity of a phantom image: remedial from 4 dB, suspension from 6 dB",
    "Goodsitt et al. 1998, Med Phys 25(8):1385-1406",
    MEMORY,
)
VERTICAL = Criterion(
    "TG128-AX",
    "1",
    "axial distance error: remedial beyond 2 mm or 2 %, whichever is larger",
    "Pfeiffer et al. 2008, Med Phys 35(12):5471-5489",
    "confirmed",
)


def penetration(value: str, verdict: str, sentence: str) -> Reading:
    line = Line("152.0", value, "6", "10", "below")
    return Reading(
        "Penetration",
        value,
        verdict,
        sentence,
        "mm",
        condition="Abdomen 4 MHz",
        line=line,
        criterion=PENETRATION,
    )


def readings(value: str, verdict: str, sentence: str) -> tuple[Reading, ...]:
    uniformity_line = Line("0", "1.6", "4", "6", "above", strict=False)
    return (
        penetration(value, verdict, sentence),
        Reading(
            "Uniformity",
            "1.6",
            "conforming",
            "1.6 dB; remedial from 4 dB.",
            "dB",
            condition="Abdomen 4 MHz",
            line=uniformity_line,
            criterion=UNIFORMITY,
        ),
        Reading(
            "Vertical distance",
            "100.4",
            "conforming",
            "0.4 mm above the nominal 100 mm; 2 mm is allowed.",
            "mm",
            condition="Abdomen 4 MHz",
            line=Line("100", "100.4", "2"),
            criterion=VERTICAL,
        ),
        Reading(
            "Ring-down",
            "3",
            "not_assessable",
            "The test frequency is not recorded, so no band applies.",
            "mm",
            qualifier="<",
            condition="Abdomen 4 MHz",
        ),
        Reading(
            "Lens",
            "green",
            "conforming",
            "No wear seen.",
            line=Line("0", "0", "1", "2", "above", False, ranks=True),
        ),
    )


def signatures(at: str) -> tuple[Signature, ...]:
    return (
        Signature("Hywel Dragić", "sonographer", at, "performed", "competent until 2027-02-01"),
        Signature("Dr Maren Oduya", "lead physicist", at, "countersigned"),
    )


def check(month: int, value: str, verdict: str, sentence: str) -> Check:
    year, number = 2024 + (month - 1) // 12, (month - 1) % 12 + 1
    day = f"{year}-{number:02d}-14"
    return Check(
        "Quarterly mechanical and uniformity",
        "2",
        "countersigned",
        due_on=f"{year}-{number:02d}-12",
        measured_at=f"{day}T09:31:00+00:00",
        recorded_at=f"{day}T16:05:00+00:00" if month % 6 == 5 else f"{day}T09:31:20+00:00",
        performer="Hywel Dragić",
        place="Aldermoor General, Radiology room 4",
        verdict=verdict,
        sentence=sentence,
        facts=(Row("Test object", "Hydrogel block 540, serial PX-2207"), Row("Temperature", "21.4 °C")),
        readings=readings(value, verdict, sentence),
        untested=(Untested("Doppler velocity", "flow object on loan to Kestrel Bay"),)
        if month % 4 == 1
        else (),
        signatures=signatures(f"{day}T16:20:00+00:00"),
        leaf=str(1200 + month * 31),
    )


CHECKS = (
    check(2, "151.6", "conforming", "Penetration lost 0.4 mm of the 6 mm allowed."),
    check(5, "149.2", "conforming", "Penetration lost 2.8 mm of the 6 mm allowed."),
    check(8, "147.5", "conforming", "Penetration lost 4.5 mm of the 6 mm allowed."),
    check(
        10, "146.0", "conforming", "Penetration lost 6.0 mm: exactly at the remedial level, which conforms."
    ),
    check(11, "145.4", "remedial", "Penetration lost 6.6 mm: beyond the remedial level of 6 mm."),
    check(14, "143.1", "remedial", "Penetration lost 8.9 mm: beyond the remedial level of 6 mm."),
    check(17, "141.8", "suspension", "Penetration lost 10.2 mm: beyond the suspension level of 10 mm."),
    Check(
        "Monthly in-air and visual",
        "1",
        "missed",
        due_on="2025-06-12",
        sentence="In theatre on two attempts.",
    ),
)
FAULT = Fault(
    "Loss of penetration",
    "suspension",
    "2025-05-14T09:52:00+01:00",
    "closed",
    closed_at="2025-06-20T14:10:00+01:00",
    seen="Penetration 141.8 mm against a baseline of 152.0 mm; uniformity unchanged at 1.6 dB.",
    downtime="37 days: waiting 9, maker 26, retest 2; covered by the pool linear for 23 days",
    look_back="Last conforming 2024-10-14. The physicist states that no review of examinations is needed.",
    proof="Acceptance on 2025-06-20, edition 1: conforming, penetration 153.0 mm",
    actions=(
        Action("2025-05-14T10:05:00+01:00", "Quarantined; ward manager told.", "Ifeoma Castellane"),
        Action("2025-05-16T11:00:00+01:00", "Sent to the maker, job 88-2145.", "Ruaridh Okonjo"),
        Action("2025-06-20T14:10:00+01:00", "Probe replaced under contract.", "Ruaridh Okonjo"),
    ),
    signatures=(
        Signature("Dr Maren Oduya", "lead physicist", "2025-06-20T15:00:00+01:00", "restored to use"),
    ),
)


def dossier(**changes) -> DeviceDossier:
    content = DeviceDossier(
        uid="01926f3e-7c1a-7b52-9a40-3f1d8e5c2b77",
        title="Quality record of a device",
        group="Tarnwater Hospitals Group",
        site="Aldermoor General",
        device="Fjellet C5 convex probe, serial LV-20931",
        state="in use",
        frozen_at="2025-12-01T08:00:00+00:00",
        as_of="2025-12-01T08:00:00+00:00",
        period="2024-01-01 to 2025-11-30",
        ledger=LedgerState("tarnwater.example/leadline", "4816", "9f" * 32, "1262", "4790"),
        labels=ENGLISH,
        identity=(
            Row("Kind", "probe, convex array"),
            Row("Maker", "Lunnby & Vale"),
            Row("Model", "Fjellet C5"),
            Row("Serial", "LV-20931"),
            Row("Applied part", "BF, contact with skin"),
            Row("Elements, pitch", "128, 0.47 mm"),
            Row("In use since", "2023-11-02"),
            Row("Keeper", "Priya Nakamura-Holt"),
        ),
        placements=(
            Placement("Aldermoor General, AG US2, port B", "2023-11-02", "2025-05-14"),
            Placement("At repair, Lunnby & Vale", "2025-05-16", "2025-06-20", "loss of penetration"),
            Placement("Aldermoor General, AG US2, port B", "2025-06-20"),
        ),
        apertures=(Aperture("convex face", "128 elements, radius 60 mm, 2-5 MHz"),),
        software=(
            SoftwareVersion("4.2", "2023-11-02", "compounding, harmonics"),
            SoftwareVersion(
                "4.3", "2024-09-03", "compounding, harmonics", "tests before and after on one day"
            ),
        ),
        plans=(
            Plan(
                "Quarterly mechanical and uniformity", "every 3 months", "technicians", "2025-12-12", "open"
            ),
            Plan("Annual survey", "yearly", "physicists", "2026-02-10", "not yet open"),
        ),
        checks=CHECKS,
        faults=(FAULT,),
        baselines=(
            Baseline(
                "Penetration",
                "152.0",
                "mm",
                "1",
                "2023-11-02",
                "acceptance, mean of ten set-ups",
                "Abdomen 4 MHz; OG-70, software 4.2; object PX-2207; by eye",
                "2025-06-20",
                "Dr Maren Oduya",
            ),
            Baseline(
                "Penetration",
                "153.0",
                "mm",
                "2",
                "2025-06-20",
                "probe replaced; the change from acceptance is +1.0 mm",
                "Abdomen 4 MHz; OG-70, software 4.3; object PX-2207; by eye",
                set_by="Dr Maren Oduya",
            ),
        ),
        cautions=(
            "Conforming is not a statement that a scan is safe or diagnostic.",
            "Limits marked “from memory” must be compared with the source before adoption.",
            "Decisions to return equipment to use rest with the responsible medical physicist or clinical engineer.",
        ),
        people=(
            Person("Dr Maren Oduya", "lead physicist"),
            Person("Hywel Dragić", "sonographer", "Quarterly mechanical and uniformity, until 2027-02-01"),
            Person("Ruaridh Okonjo", "clinical engineer"),
            Person("נועה ברק", "sonographer"),
        ),
    )
    return replace(content, **changes)
