"""The poles of a layout, with or without the multipoles of its piers."""

from dataclasses import dataclass

from forebay.flow.assembly import PoleBuilder, add_elements, add_piers, ambient_constant, offset_of
from forebay.flow.layout import Pier
from forebay.flow.piers import PierSolution
from forebay.flow.poles import PoleField
from forebay.flow.settling import Ground
from forebay.flow.sheets.standing import Footings


@dataclass(frozen=True, slots=True)
class Sources:
    """Everything rational that stands in the water of a layout."""

    ground: Ground
    standing: Footings

    @classmethod
    def of(cls, ground: Ground, standing: Footings) -> "Sources":
        """Sources of a layout; standing : elements on rings."""
        return cls(ground, standing)

    def field(self, piers: PierSolution | None = None) -> PoleField:
        """Poles of elements and piers with all images, and the piers' multipoles once they are known."""
        layout, frame = self.ground.layout, self.ground.frame
        builder = PoleBuilder(frame, self.ground.scale)
        add_elements(builder, layout, frame, self.standing)
        numbered = enumerate(layout.structures, len(layout.elements) + 1)
        owners = [owner for owner, structure in numbered if isinstance(structure, Pier)]
        add_piers(builder, layout.piers, owners)
        if piers is not None:
            for owner, pier, moments in zip(owners, layout.piers, piers.moments, strict=True):
                builder.add_moments(pier.at, moments, owner)
        return builder.build(ambient_constant(layout, frame), offset_of(layout, frame))
