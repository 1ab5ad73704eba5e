"""Map grids: systems in which positions are given, and the plane grid in which a layout's x, y are metres."""

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from pyproj import CRS, Geod, Transformer
from pyproj.exceptions import CRSError

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.errors import Path
from forebay.trade.survey.errors import OutsideSystemError, UnknownSystemError, UnsuitableGridError

WGS84 = "EPSG:4326"
"""Longitude and latitude as GeoJSON has them."""

STEP = 50.0
"""Half the length over which the scale of a grid is measured on the ground [m]."""

MOST_SKEW = 1e-4
"""Difference of the scales along x and y, and of their angle from 90 degrees, in a grid [-, rad]."""

MOST_STRETCH = 1e-2
"""Error of lengths in a grid that is still taken as a plan [-]: velocities are as far off."""

WIDEST = 180.0
"""Difference of longitudes from which positions count as lying on both sides of the antimeridian [deg]."""

_GROUND = Geod(ellps="WGS84")


@dataclass(frozen=True, slots=True)
class MapGrid:
    """Plane grid of a layout.

    code : "EPSG:n", or None for a grid that no register holds
    definition : what a projection library reads: the code, or a PROJ string
    """

    code: str | None
    definition: str

    def to_wgs84(self, z: ComplexArray) -> FloatArray:
        """Longitude and latitude [deg] of places x + iy [m], shape (n, 2).

        Raises
        ------
        OutsideSystemError : a place has none, or the places lie on both sides of the antimeridian
        """
        longitude, latitude = _transformer(self.definition, WGS84).transform(z.real, z.imag)
        places = np.stack([np.asarray(longitude), np.asarray(latitude)], axis=-1)
        if not np.isfinite(places).all():
            raise OutsideSystemError(f"a position of the answer has no place in {self.definition}", ("grid",))
        require_one_side(places[:, 0], ("grid",))
        return places

    def north(self, z: complex) -> float:
        """Direction of true north in the grid at a place [rad], anticlockwise from +x."""
        at = self.to_wgs84(np.array([z]))[0]
        back = _transformer(WGS84, self.definition)
        (x0, y0), (x1, y1) = (back.transform(at[0], at[1] + step) for step in (0.0, 1e-4))
        return float(np.arctan2(y1 - y0, x1 - x0))


@lru_cache(maxsize=64)
def _transformer(source: str, target: str) -> Transformer:
    return Transformer.from_crs(source, target, always_xy=True)


@lru_cache(maxsize=64)
def _system(code: str) -> CRS | None:
    try:
        return CRS.from_user_input(code)
    except CRSError:
        return None


def known_system(code: str, path: Path) -> CRS:
    """Coordinate system of an EPSG code.

    Raises
    ------
    UnknownSystemError : there is none, or it has no two coordinates on the ground
    """
    system = _system(code)
    if system is None:
        raise UnknownSystemError(f"{code} is no coordinate system known here", path)
    if not (system.is_projected or system.is_geographic) or len(system.axis_info) != 2:
        raise UnknownSystemError(f"{code} ({system.name}) does not give two coordinates on the ground", path)
    return system


def projected_grid(code: str, path: Path) -> MapGrid:
    """Grid of an EPSG code.

    Raises
    ------
    UnknownSystemError : there is no such system
    UnsuitableGridError : it is not plane, or does not count in metres
    """
    system = known_system(code, path)
    if not system.is_projected:
        raise UnsuitableGridError(f"{code} ({system.name}) is not a plane grid", path)
    unit = system.axis_info[0]
    if unit.unit_conversion_factor != 1.0:
        raise UnsuitableGridError(f"{code} ({system.name}) counts in {unit.unit_name}, not in metres", path)
    return MapGrid(code, code)


def serves_as_grid(code: str) -> bool:
    """Whether positions in a system are metres of a plane."""
    system = _system(code)
    return system is not None and system.is_projected and system.axis_info[0].unit_conversion_factor == 1.0


def tangent_grid(longitude: float, latitude: float) -> MapGrid:
    """Transverse Mercator grid on WGS 84 that touches the ground at a place [deg]: scale 1 there."""
    return MapGrid(
        None,
        f"+proj=tmerc +lat_0={latitude:.6f} +lon_0={longitude:.6f} +k=1 +x_0=0 +y_0=0 +datum=WGS84 +units=m"
        " +no_defs",
    )


def to_system(places: FloatArray, source: str, target: str, path: Path) -> FloatArray:
    """Positions, shape (n, 2), from one system to another; x or longitude first.

    Raises
    ------
    OutsideSystemError : a position has no place in the target; the path of a list ends with its index
    """
    moved = np.stack(_transformer(source, target).transform(places[:, 0], places[:, 1]), axis=-1)
    astray = np.flatnonzero(~np.isfinite(moved).all(axis=1))
    if astray.size:
        where = (*path, int(astray[0])) if len(places) > 1 else path
        raise OutsideSystemError(f"a position has no place in {source}", where)
    return np.asarray(moved, dtype=np.float64)


def require_one_side(longitudes: FloatArray, path: Path) -> None:
    """Refuse longitudes [deg] on both sides of the antimeridian.

    Raises
    ------
    OutsideSystemError : they differ by WIDEST or more
    """
    if longitudes.size and float(np.ptp(longitudes)) >= WIDEST:
        raise OutsideSystemError("the positions lie on both sides of the antimeridian", path)


def scale_error(grid: MapGrid, places: ComplexArray, path: Path) -> float:
    """Largest error of lengths in a grid at places x + iy [m], as part of the length on the ground [-].

    Measured on the ellipsoid by geodesics over 2 STEP, along x and along y; 1e-7 accurate.

    Raises
    ------
    UnsuitableGridError : the grid turns circles into ellipses (a potential flow would not stay one), or
        its lengths are more than MOST_STRETCH off
    """
    east, azimuth_east = _ground_steps(grid, places, STEP)
    north, azimuth_north = _ground_steps(grid, places, 1j * STEP)
    skew = np.abs(east - north) / north
    angle = np.abs(np.remainder(azimuth_east - azimuth_north, 360.0) - 90.0)
    worst = float(max(skew.max(), np.deg2rad(angle.max())))
    if worst > MOST_SKEW:
        raise UnsuitableGridError(
            f"{grid.definition} is not conformal here: scales or angles differ by {worst:.2g}", path
        )
    stretch = float(np.abs(2 * STEP / np.concatenate([east, north]) - 1.0).max())
    if stretch > MOST_STRETCH:
        raise UnsuitableGridError(
            f"lengths in {grid.definition} are up to {stretch:.2g} off here; choose a grid of the region",
            path,
        )
    return stretch


def _ground_steps(grid: MapGrid, places: ComplexArray, step: complex) -> tuple[FloatArray, FloatArray]:
    """Length on the ground [m] and azimuth [deg] of the step from z - step to z + step."""
    start, end = grid.to_wgs84(places - step), grid.to_wgs84(places + step)
    azimuth, _, length = _GROUND.inv(start[:, 0], start[:, 1], end[:, 0], end[:, 1])
    return np.asarray(length, dtype=np.float64), np.asarray(azimuth, dtype=np.float64)
