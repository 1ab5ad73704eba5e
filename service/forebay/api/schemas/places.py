"""Where a field is wanted: points, columns, a line or a grid."""

from typing import Annotated, Self

import numpy as np
import numpy.typing as npt
from pydantic import Field, PrivateAttr, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Strict
from forebay.api.schemas.quantities import Metres, PointCount, Position
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem

ComplexArray = npt.NDArray[np.complex128]
FloatArray = npt.NDArray[np.float64]

WAYS = ("points", "x and y", "line", "grid")
"""Ways of saying where; a request uses exactly one."""

Column = Annotated[list[Metres], Field(min_length=1, fail_fast=True, examples=[[0.0, 10.0, 20.0]])]
Span = Annotated[list[Metres], Field(min_length=2, max_length=2, fail_fast=True, examples=[[0.0, 300.0]])]


class Line(Strict):
    """Equally spaced points of a straight line, ends included."""

    start: Annotated[Position, Field(alias="from", description="First point", examples=[[0.0, 20.0]])]
    end: Annotated[Position, Field(alias="to", description="Last point", examples=[[300.0, 20.0]])]
    count: Annotated[PointCount, Field(description="Number of points")]

    def positions(self, units: UnitSystem) -> ComplexArray:
        """Points in SI."""
        ends = units.position(self.start), units.position(self.end)
        return np.linspace(*ends, self.count).astype(np.complex128)


class Grid(Strict):
    """Rectangular grid along the axes; the answer's columns run row by row, x fastest."""

    x: Annotated[Span, Field(description="First and last x")]
    nx: Annotated[PointCount, Field(description="Number of columns")]
    y: Annotated[Span, Field(description="First and last y", examples=[[0.0, 110.0]])]
    ny: Annotated[PointCount, Field(description="Number of rows")]

    def positions(self, units: UnitSystem) -> ComplexArray:
        """Points in SI, row-major."""
        x = np.linspace(units.read(self.x[0], "m"), units.read(self.x[1], "m"), self.nx)
        y = np.linspace(units.read(self.y[0], "m"), units.read(self.y[1], "m"), self.ny)
        return (x[None, :] + 1j * y[:, None]).ravel()


class At(Strict):
    """Exactly one of `points`, `x` with `y`, `line`, `grid`."""

    model_config = {"json_schema_extra": describe_ways(("points",), ("x", "y"), ("line",), ("grid",))}

    points: Annotated[
        Annotated[list[Position], Field(min_length=1, fail_fast=True)] | None,
        Field(description="Points one by one", examples=[[[10.0, 5.0], [20.0, 5.0]]]),
    ] = None
    x: Annotated[Column | None, Field(description="Column of x, the fast way for many points")] = None
    y: Annotated[Column | None, Field(description="Column of y, as long as x")] = None
    line: Annotated[Line | None, Field(description="Equally spaced points of a line")] = None
    grid: Annotated[Grid | None, Field(description="Points of a grid")] = None

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        """Check that one way is used, and that columns match."""
        if (self.x is None) != (self.y is None):
            raise PydanticCustomError("one_way", "`x` and `y` go together")
        if sum(way is not None for way in (self.points, self.x, self.line, self.grid)) != 1:
            raise PydanticCustomError("one_way", "Exactly one of points, x and y, line, grid")
        if self.x is not None and self.y is not None and len(self.x) != len(self.y):
            raise PydanticCustomError("unequal_columns", "`x` and `y` differ in length")
        return self

    _columns: tuple[FloatArray, FloatArray] | None = PrivateAttr(default=None)

    def is_at(self, place: tuple[float, float]) -> bool:
        """Whether one place alone is asked for, point by point or in columns."""
        return self.points == [list(place)] or (self.x == [place[0]] and self.y == [place[1]])

    def with_columns(self, x: FloatArray, y: FloatArray) -> Self:
        """The same with the coordinates of arrays that were read and checked outside, shapes (n,)."""
        changed = self.model_copy()
        changed._columns = (x, y)  # noqa: SLF001  (of the same class)
        return changed

    def written_out(self) -> Self:
        """The same with every coordinate in the field that it was given in, arrays read outside included."""
        if self._columns is None:
            return self
        x, y = (column.tolist() for column in self._columns)
        pairs = [[a, b] for a, b in zip(x, y, strict=True)]
        return self.model_copy(update={"points": pairs} if self.x is None else {"x": x, "y": y})

    @property
    def count(self) -> int:
        """Number of points asked for."""
        if self.grid is not None:
            return self.grid.nx * self.grid.ny
        if self.line is not None:
            return self.line.count
        if self._columns is not None:
            return len(self._columns[0])
        return len(self.points or self.x or ())

    @property
    def shape(self) -> list[int]:
        """Shape of the columns: [ny, nx] of a grid, else [n]."""
        return [self.count] if self.grid is None else [self.grid.ny, self.grid.nx]

    def positions(self, units: UnitSystem) -> ComplexArray:
        """Points in SI, flat."""
        if self.grid is not None:
            return self.grid.positions(units)
        if self.line is not None:
            return self.line.positions(units)
        if self._columns is not None:
            x, y = (units.read_array(column, "m") for column in self._columns)
            return x + 1j * y
        if self.points is not None:
            pairs = units.read_array(np.array(self.points, dtype=np.float64), "m")
            return pairs[:, 0] + 1j * pairs[:, 1]
        columns = (np.array(self.x, dtype=np.float64), np.array(self.y, dtype=np.float64))
        x, y = (units.read_array(column, "m") for column in columns)
        return x + 1j * y
