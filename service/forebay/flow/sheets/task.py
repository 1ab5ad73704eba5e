"""From a layout to what is to be solved on its rings."""

from dataclasses import replace

import numpy as np

from forebay.flow.assembly import PoleBuilder, offset_of
from forebay.flow.ends import inflows
from forebay.flow.layout import Doublet, Layout, Surveyed, Vortex, outflow
from forebay.flow.placement import TOUCHING, places
from forebay.flow.poles import PoleField
from forebay.flow.settling import Ground
from forebay.flow.sheets.adapt import Walls
from forebay.flow.sheets.boundary import Task, WithMoments
from forebay.flow.sheets.known import Known, KnownFlow
from forebay.flow.sheets.origin import Shifted, middle_of, shifted_frame, shifted_rings
from forebay.flow.sheets.piers import PierSet
from forebay.flow.sheets.pole_flow import PoleFlow
from forebay.flow.sheets.ring import Ring
from forebay.flow.sheets.stand_ins import stand_ins_of
from forebay.flow.sheets.standing import DOUBLED, Footings
from forebay.flow.shores import frame_of


def task_of(
    ground: Ground, standing: Footings, flow: KnownFlow, field: PoleField, with_moments: WithMoments
) -> Task:
    """What there is to solve.

    flow : without the rings and without multipoles of the piers;  field : its poles
    """
    layout, frame, rings = ground.layout, ground.frame, ground.rings.rings

    origin = middle_of(rings)
    walls = _walls(ground, origin)

    def vortices(ring: Ring, strength: complex) -> PoleField:
        builder = PoleBuilder(walls.frame, ground.scale)
        builder.add_pole(complex(ring.starts[0]), strength, 0)
        return builder.build(0j, offset_of(layout, frame))

    logs = _logs(layout, rings, standing)
    poles = [vortices(ring, log) for ring, log in zip(walls.rings, logs, strict=True) if log]
    known = Known(
        flow=Shifted(flow, origin),
        vortices=tuple(PoleFlow(pole, walls.frame) for pole in poles),
        outflows=_outflows(layout),
        logs=logs,
        pinned=tuple(
            at - origin for k in standing for name, at in places(layout.elements[k]) if name == "at"
        ),
        flux=flux_of(layout, rings),
        stand_ins=stand_ins_of(layout, standing, walls.rings[0], origin),
    )
    piers = tuple(replace(pier, at=pier.at - origin) for pier in layout.piers)
    return Task(
        layout=layout,
        walls=walls,
        origin=origin,
        known=known,
        piers=PierSet(piers, walls.frame, field) if piers else None,
        with_moments=lambda solution: Shifted(with_moments(solution), origin),
        vortices=vortices,
        offset=offset_of(layout, frame),
    )


def _walls(ground: Ground, origin: complex) -> Walls:
    """Rings in a frame that depends on them alone, so that a factorisation serves other elements."""
    rings = ground.rings.rings
    vertices = np.concatenate([ring.vertices for ring in rings])
    size = float(np.max(np.abs(vertices - origin)))
    frame = shifted_frame(frame_of(ground.layout.shore, origin, size), origin)
    return Walls(shifted_rings(rings, origin), frame, TOUCHING * size, ground.layout.tolerance)


def _outflows(layout: Layout) -> dict[str, float]:
    if not isinstance(layout.shore, Surveyed):
        return {}
    flows = inflows(layout.shore, layout)
    return {edge.name: -flow for edge, flow in zip(layout.shore.edges, flows, strict=True)}


def _logs(layout: Layout, rings: tuple[Ring, ...], standing: Footings) -> tuple[complex, ...]:
    """Poles of F at the starts of rings: circulation of free solids; all that stands in surveyed water.

    Together with the elements they leave nothing at infinity; on the outer ring elements count twice.
    """
    solids = [-1j * ring.circulation / (2.0 * np.pi) if ring.is_solid else 0j for ring in rings]
    if rings[0].is_solid:
        return tuple(solids)
    circulation = sum(e.circulation for e in layout.elements if isinstance(e, Vortex))
    circulation += sum(pier.circulation for pier in layout.piers)
    doubled = {k for k, footing in standing.items() if not footing.ring.is_solid}
    flows = [outflow(e) * (DOUBLED if k in doubled else 1.0) for k, e in enumerate(layout.elements)]
    flux = sum(flows) / layout.depth
    total = complex(flux, -circulation) / (2.0 * np.pi) + sum(solids)
    return (-total, *solids[1:])


def flux_of(layout: Layout, rings: tuple[Ring, ...]) -> float:
    """What errors of psi are compared with [m2/s].

    Surveyed water: half the sum of all discharges per depth, the flow through. Elsewhere the current times
    the largest outline, and all discharges and circulations. Without any of these 1.
    """
    sources = sum(abs(outflow(element)) for element in layout.elements) / layout.depth
    spin = sum(abs(e.circulation) for e in layout.elements if isinstance(e, Vortex))
    spin += sum(abs(structure.circulation) for structure in layout.structures)
    spin += sum(abs(ring.circulation) for ring in rings if ring.owner == 0)
    size = max((ring.diameter for ring in rings if ring.is_solid), default=1.0)
    through = 0.5 * (sources + sum(abs(flow) for flow in _outflows(layout).values()))
    if isinstance(layout.shore, Surveyed) and through > 0.0:
        return through
    ambient = layout.ambient
    strain = max(abs(entry) for row in ambient.gradient for entry in row)
    reach = size + max(abs(complex(ring.starts[0]) - ambient.at) for ring in rings)
    current = (abs(ambient.velocity) + strain * reach) * size
    moments = sum(abs(e.moment) for e in layout.elements if isinstance(e, Doublet)) / size
    return (current + sources + spin + moments) or 1.0
