"""The demo's fleet as tables: sites, rooms, scanners, probes, test objects and instruments. All invented."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class ProbeClass:
    """What probes of one class share; values are typical readings, in mm where nothing else is said."""

    array_kind: str
    contact_class: str
    applied_part: str
    apertures: tuple[tuple[str, int | None], ...]
    preset: str
    frequency_mhz: str
    penetration: int
    reverberation: str
    bands: int
    axial: str
    lateral: str
    ring_down: str
    low_echo: str


CLASSES = {
    "convex": ProbeClass("convex", "skin", "BF", (("face", 192),), "Abdomen", "3.5", 150, "12.0", 5, "0.8", "2.1", "3.0", "4.0"),
    "linear": ProbeClass("linear", "skin", "BF", (("face", 192),), "Vascular", "9.0", 62, "8.5", 6, "0.4", "0.9", "1.5", "2.5"),
    "linear 18 MHz": ProbeClass("linear", "skin", "BF", (("face", 288),), "Small parts", "18.0", 31, "5.0", 6, "0.2", "0.4", "1.0", "1.5"),
    "phased": ProbeClass("phased", "skin", "CF", (("face", 80),), "Cardiac", "2.5", 150, "15.0", 4, "1.0", "3.0", "5.0", "5.0"),
    "endovaginal": ProbeClass("micro_convex", "mucous_membrane", "BF", (("face", 128),), "Gynaecology", "6.5", 88, "9.0", 5, "0.5", "1.3", "2.0", "3.0"),
    "3D": ProbeClass("mechanical_3d", "skin", "BF", (("face", 192),), "Obstetrics", "4.5", 134, "11.5", 4, "0.7", "1.8", "2.5", "3.5"),
    "micro-convex": ProbeClass("micro_convex", "skin", "BF", (("face", 128),), "Paediatric", "6.0", 92, "9.5", 5, "0.6", "1.4", "2.5", "3.0"),
    "transoesophageal": ProbeClass("matrix", "mucous_membrane", "CF", (("face", None),), "Transoesophageal", "5.5", 104, "10.0", 4, "0.7", "1.6", "2.5", "3.5"),
    "biplane": ProbeClass("linear", "mucous_membrane", "BF", (("convex", 128), ("linear", 192)), "Prostate", "7.5", 76, "9.0", 5, "0.5", "1.1", "2.0", "2.5"),
    "CW pencil": ProbeClass("cw_pencil", "skin", "CF", (("tip", 2),), "CW Doppler", "2.0", 0, "0", 0, "0", "0", "0", "0"),
    "wireless": ProbeClass("convex", "skin", "BF", (("face", 128),), "Abdomen", "3.5", 138, "11.0", 4, "0.9", "2.3", "3.0", "4.0"),
}  # fmt: skip


@dataclass(frozen=True)
class Hospital:
    """A site with its rooms in the order they are walked."""

    code: str
    name: str
    rooms: tuple[str, ...]


SITES = (
    Hospital("AG", "Aldermoor General", ("Ultrasound 1", "Ultrasound 2", "Theatre 3", "Cardiology", "Vascular clinic", "Intensive care")),
    Hospital("KB", "Kestrel Bay", ("Ultrasound", "Outpatients", "Emergency")),
    Hospital("SO", "St Orlaith Women & Children", ("Fetal medicine", "Gynaecology", "Children's ward")),
)  # fmt: skip


@dataclass(frozen=True)
class Console:
    """A scanner; ``day`` is how many days from now its monthly checks fall due (negative: that day has gone)."""

    name: str
    maker: str
    model: str
    serial: str
    site: str
    room: str
    software: str
    day: int


SCANNERS = (
    Console("AG US1", "Ostrigard", "OG-70", "OG7-20114", "AG", "Ultrasound 1", "4.2", 2),
    Console("AG US2", "Lunnby & Vale", "Fjellet 9", "F9-03351", "AG", "Ultrasound 2", "11.0.3", -5),
    Console("AG US3", "Ostrigard", "OG-45", "OG4-11872", "AG", "Theatre 3", "3.8", -12),
    Console("AG US4", "Ostrigard", "OG-70", "OG7-20127", "AG", "Cardiology", "4.2", 0),
    Console("AG US5", "Lunnby & Vale", "Fjellet 5", "F5-01940", "AG", "Vascular clinic", "6.2.1", -3),
    Console("AG US6", "Pellantis", "PX Tern", "PXT-0877", "AG", "Intensive care", "2.14", -8),
    Console("KB US1", "Lunnby & Vale", "Fjellet 9", "F9-03388", "KB", "Ultrasound", "11.0.3", 4),
    Console("KB US2", "Ostrigard", "OG-45", "OG4-11903", "KB", "Outpatients", "3.8", -10),
    Console("KB US3", "Pellantis", "PX Tern", "PXT-0902", "KB", "Emergency", "2.14", 10),
    Console("SO US1", "Ostrigard", "OG-70", "OG7-20139", "SO", "Fetal medicine", "4.2", 1),
    Console("SO US2", "Lunnby & Vale", "Fjellet 5", "F5-01966", "SO", "Gynaecology", "6.2.1", -7),
    Console("SO US3", "Pellantis", "PX Tern", "PXT-0915", "SO", "Children's ward", "2.14", 6),
)


@dataclass(frozen=True)
class Transducer:
    """A probe with the scanner it belongs to; the pooled one and the handheld belong to none."""

    kind: str
    serial: str
    scanner: str
    follow_up: bool = False
    use: str = ""


PROBES = (
    Transducer("convex", "C-4101", "AG US1", follow_up=True), Transducer("convex", "C-4102", "AG US2", follow_up=True),
    Transducer("convex", "C-4103", "AG US4", follow_up=True), Transducer("convex", "C-4104", "AG US6"),
    Transducer("convex", "C-4105", "KB US1", follow_up=True), Transducer("convex", "C-4106", "KB US3", follow_up=True),
    Transducer("convex", "C-4107", "SO US1", follow_up=True), Transducer("convex", "C-4108", "SO US2"),
    Transducer("linear", "L-5201", "AG US1"), Transducer("linear", "L-5202", "AG US2"),
    Transducer("linear", "L-5203", "AG US5"), Transducer("linear", "L-5204", "AG US6", use="Intensive care lines"),
    Transducer("linear", "L-5205", "KB US1", follow_up=True), Transducer("linear", "L-5206", "KB US2", follow_up=True),
    Transducer("linear", "L-5207", "SO US3"), Transducer("linear", "L-5208", ""),
    Transducer("linear 18 MHz", "H-1801", "AG US1"), Transducer("linear 18 MHz", "H-1802", "AG US2"),
    Transducer("linear 18 MHz", "H-1803", "AG US3", use="Theatre"), Transducer("linear 18 MHz", "H-1804", "SO US3"),
    Transducer("phased", "P-2501", "AG US4"), Transducer("phased", "P-2502", "AG US4"),
    Transducer("phased", "P-2503", "AG US6"), Transducer("phased", "P-2504", "AG US5"),
    Transducer("phased", "P-2505", "KB US3", follow_up=True), Transducer("phased", "P-2506", "SO US3"),
    Transducer("endovaginal", "V-6501", "AG US2"), Transducer("endovaginal", "V-6502", "KB US2", follow_up=True),
    Transducer("endovaginal", "V-6503", "SO US1"), Transducer("endovaginal", "V-6504", "SO US2"),
    Transducer("endovaginal", "V-6505", "SO US2"),
    Transducer("3D", "D-4501", "AG US1"), Transducer("3D", "D-4502", "SO US1"),
    Transducer("micro-convex", "M-6001", "AG US3"), Transducer("micro-convex", "M-6002", "KB US2", follow_up=True),
    Transducer("transoesophageal", "T-5501", "AG US4"), Transducer("transoesophageal", "T-5502", "AG US4"),
    Transducer("biplane", "B-7501", "AG US5"), Transducer("CW pencil", "W-2001", "AG US5"),
    Transducer("wireless", "WH-0042", ""),
)  # fmt: skip

WIRELESS_SITE = "KB"
PROBE_MODELS = {
    "convex": "C5", "linear": "L12", "linear 18 MHz": "L22", "phased": "P4", "endovaginal": "V9", "3D": "D7",
    "micro-convex": "M8", "transoesophageal": "T8", "biplane": "BP10", "CW pencil": "CW2", "wireless": "Wren-H",
}  # fmt: skip
KESTREL_BAY_HOLIDAYS = {(6, 24): "Herring Fair", (9, 9): "Harbour Day", (11, 11): "Lantern Night"}
EVERYWHERE_HOLIDAYS = {(1, 1): "New Year's Day", (12, 25): "Christmas Day", (12, 26): "Boxing Day"}
"""Month and day to name; Kestrel Bay's are local and invented."""
