"""From a design to its conductors: the only place of the solver that knows a design."""

from __future__ import annotations

from boomwright.data.tables import conductor_names, conductors, materials
from boomwright.design.model import Design, Driven
from boomwright.design.model import Rod as DesignRod
from boomwright.rf.conductors import Coat, Conductor, Folded, Loop, Rod, Wires
from boomwright.units import m_from_mm

FED_TAG = "DE"


def wires_of(design: Design) -> Wires:
    """The conductors of a design: rods in order of position, the driven element among them.

    Boom, adhesive and resin are not in the equations (`design_warnings` says so). A coat is taken at the middle of its
    material's working range.
    """
    placed: list[tuple[float, Conductor]] = [(rod.at_mm, rod_of(rod)) for rod in design.rods]
    placed.append((design.driven.at_mm, driven_of(design.driven)))
    return Wires(tuple(conductor for _, conductor in sorted(placed, key=lambda pair: pair[0])))


def rod_of(rod: DesignRod) -> Rod:
    """The conductor of a parasitic rod."""
    return Rod(
        rod.tag,
        m_from_mm(rod.at_mm),
        m_from_mm(rod.length_mm),
        m_from_mm(rod.diameter_mm) / 2.0,
        conductivity_s_m=conductors()[rod.material].conductivity_s_m,
        coat=coat_of(rod),
    )


def driven_of(driven: Driven) -> Conductor:
    """The conductor of a driven element, fed across its gap."""
    at_m, radius_m, gap_m = m_from_mm(driven.at_mm), m_from_mm(driven.diameter_mm) / 2.0, m_from_mm(driven.gap_mm)
    conductivity_s_m, coat = conductors()[driven.material].conductivity_s_m, coat_of(driven)
    bend_m = None if driven.bend_radius_mm is None else m_from_mm(driven.bend_radius_mm)
    if driven.form == "loop":
        assert driven.perimeter_mm is not None
        return Loop(
            FED_TAG,
            at_m,
            m_from_mm(driven.perimeter_mm),
            radius_m,
            gap_m,
            driven.shape or "circle",
            bend_m,
            conductivity_s_m=conductivity_s_m,
            coat=coat,
        )
    assert driven.length_mm is not None
    length_m = m_from_mm(driven.length_mm)
    if driven.form == "straight":
        return Rod(FED_TAG, at_m, length_m, radius_m, 0.0, gap_m, conductivity_s_m, coat)
    assert driven.spacing_mm is not None
    return Folded(
        FED_TAG,
        at_m,
        length_m,
        m_from_mm(driven.spacing_mm),
        radius_m,
        gap_m,
        bend_m,
        upright=driven.plane == "upright",
        conductivity_s_m=conductivity_s_m,
        coat=coat,
    )


def coat_of(element: DesignRod | Driven) -> Coat | None:
    """The coat of a rod or driven element; None where it has none."""
    if element.coat_mm <= 0.0 or element.coat_material is None:
        return None
    material = materials()[element.coat_material]
    if material.permittivity is None or material.loss_tangent is None:
        return None
    low, high = material.permittivity
    least, most = material.loss_tangent
    return Coat(m_from_mm(element.coat_mm), (low + high) / 2.0, (least + most) / 2.0)


def design_warnings(design: Design) -> tuple[str, ...]:
    """What of a design the equations leave out."""
    found = []
    if design.boom is not None:
        metal = design.boom.material in conductor_names()
        # A dielectric slows the wave along the rods; metal across their middles shortens them (common practice).
        kind, way = ("metal", "higher") if metal else ("dielectric", "lower")
        shape = f"{design.boom.width_mm:g} mm {design.boom.section} {design.boom.material} boom"
        found.append(f"the {shape} ({kind}) is not in the equations: expect the built antenna to read a little {way}")
        found.append("adhesive, resin and mould are not in the equations")
    coated = [rod.tag for rod in design.rods if rod.coat_mm > 0.0]
    coated += [FED_TAG] if design.driven.coat_mm > 0.0 else []
    if coated:
        found.append(f"coats of {', '.join(coated)} are taken at the middle of their material's working range")
    return tuple(found)
