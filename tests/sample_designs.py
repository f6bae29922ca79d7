"""Designs with plain numbers that tests reckon with, whatever a new window opens with."""

from core.design import spelled
from core.design.feed import Branch, DualEdge, LeadIn, ProbePin
from core.design.model import Brief, Design, Element
from core.design.polarisation import Polarisation
from core.design.stock import DiscGround, Stock


def tape_design():
    """Right-hand tape build on foam with a delay branch: buildable, not tuned."""
    branch = Branch(landing=18e-3, gap=7e-3, width=3e-3)
    return Design(
        name="Mast 7",
        brief=Brief(2.32e9, Polarisation.RHCP, 50.0, 2.0, 3.0),
        stock=Stock(
            spacer=spelled.spacer("polystyrene:6mm"),
            foil=spelled.foil("copper-tape"),
            ground=DiscGround(0.2),
        ),
        element=Element(54e-3, 54e-3),
        feed=DualEdge(
            first=branch,
            second=branch,
            delay_width=4e-3,
            delay_length=54e-3,
            tee=0.0,
            lead_in=LeadIn(0.0, 4e-3),
            probe=ProbePin(1.27e-3, 3e-3, 4.1e-3),
        ),
        making=spelled.making("knife"),
    )
