"""A few designs to draw: small and large, both feeds, both senses, every form of page."""

from sample_designs import tape_design

from core.design.edit import with_texts

_TINY = [
    ("name", "Horn filler for ten gigahertz with a name as long as it gets"),
    ("revision", "12b"),
    ("brief.frequency", "10 GHz"),
    ("making.process", "photo-etch"),
    ("stock.spacer", "FR-4:0.8mm"),
    ("stock.foil", "copper-35"),
    ("stock.ground", "rect:24mmx26mm"),
    ("element", "rect:10mmx9mm"),
    ("feed.probe.diameter", "0.3mm"),
    ("feed.probe.pad", "0.9mm"),
    ("feed.probe.clearance", "0.8mm"),
    ("feed.first.landing", "3mm"),
    ("feed.first.gap", "1.2mm"),
    ("feed.first.width", "0.4mm"),
    ("feed.second.landing", "3mm"),
    ("feed.second.gap", "1.2mm"),
    ("feed.second.width", "0.4mm"),
    ("feed.delay_width", "0.5mm"),
    ("feed.delay_length", "10mm"),
    ("feed.lead_in.length", "3mm"),
    ("feed.lead_in.width", "0.6mm"),
]

_HUGE = [
    ("name", "W" * 60),
    ("brief.frequency", "868 MHz"),
    ("making.process", "scissors"),
    ("stock.spacer", "air:14mm+card:1mm+card:1mm"),
    ("stock.ground", "rect:300mmx300mm"),
    ("element", "rect:150mmx150mm"),
    ("feed.first.landing", "40mm"),
    ("feed.first.gap", "18mm"),
    ("feed.first.width", "6mm"),
    ("feed.second.landing", "40mm"),
    ("feed.second.gap", "18mm"),
    ("feed.second.width", "6mm"),
    ("feed.delay_width", "8mm"),
    ("feed.delay_length", "140mm"),
]

_PROBE = [
    ("name", "Café Ωmega <&> λ/4"),
    ("feed", "probe"),
    ("stock.ground", "disc:110mm"),
    ("feed.x", "10mm"),
    ("feed.y", "11mm"),
]

_LEFT = [("brief.polarisation", "lhcp"), ("stock.ground", "rect:130mmx120mm")]
_CARD = [("stock.spacer", "card:1mm+card:1mm+card:1mm"), ("stock.ground", "rect:90mmx100mm")]


def changed(*changes):
    """Tape design with changes as typed."""
    return with_texts(tape_design(), changes)


DRAWN = {
    "round": changed(),
    "tiny": changed(*_TINY),
    "huge": changed(*_HUGE),
    "probe": changed(*_PROBE),
    "left": changed(*_LEFT),
    "card": changed(*_CARD),
}
