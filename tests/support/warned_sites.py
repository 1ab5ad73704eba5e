"""Sites of which one thing is varied, for the rules that warn of it."""

import math
from dataclasses import replace

import numpy as np
from scipy.optimize import brentq
from scipy.special import k1

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    Corner,
    EdgeProfile,
    Layout,
    LineSink,
    OpenEdge,
    Outline,
    Pier,
    Sink,
    Source,
    StraightBank,
    Surveyed,
    Vortex,
    Water,
)
from forebay.trade.applicability.site import Readings, Site, SiteData
from forebay.trade.water import water_properties

BANK = StraightBank(0j, 1 + 0j)
DEPTH = 4.0
LID_DEPTH = 4.0 / 9.80665
"""Depth in which the speed of long waves sqrt(g h) is 2 m/s, without rounding."""

EARTH_RATE = 7.2921159e-5
STILL = Layout(DEPTH)
CURRENT = Layout(DEPTH, ambient=Ambient(0.5 + 0j))


def site(layout, data=None, readings=None):
    return Site(layout, data or SiteData(), readings or Readings())


def flowing(speed, depth=DEPTH):
    return site(Layout(depth, ambient=Ambient(1j * speed)))


def pair(distance, layout=CURRENT, data=None):
    return site(replace(layout, elements=(Sink("a", 0j, 1.0), Vortex("b", distance + 0j, 1.0))), data)


def asked(distance):
    points = np.array([50.0 + 0j, 1j * distance])
    return site(replace(CURRENT, elements=(Source("a", 0j, 1.0),)), readings=Readings(points))


def pier_in(speed, radius=1.5):
    return site(Layout(DEPTH, ambient=Ambient(speed + 0j), structures=(Pier("P", 0j, radius),)))


def box(length, breadth):
    """An outline about the origin, its length along x."""
    a, b = 0.5 * length, 0.5 * breadth
    return Outline("box", (complex(-a, -b), complex(a, -b), complex(a, b), complex(-a, b)))


def box_in(speed, breadth=3.0):
    return site(Layout(DEPTH, ambient=Ambient(speed + 0j), structures=(box(2.0 * breadth, breadth),)))


def wake(number, body=None):
    # S = c_f D / h with D = h
    body = body or Pier("P", 0j, 0.5 * DEPTH)
    return site(replace(CURRENT, structures=(body,)), SiteData(bed_friction=number))


def outfall(area=None, distance=50.0, current=0.5):
    elements = (Source("works", 0j, 2.0), Sink("town", distance + 0j, 1.0))
    data = SiteData(port_areas={} if area is None else {"works": area})
    return site(Layout(DEPTH, ambient=Ambient(current + 0j), elements=elements), data)


def corner(degrees):
    return site(Layout(DEPTH, shore=Corner(0j, 1 + 0j, math.radians(degrees))))


def cored(model, distance):
    vortex = Vortex("g", 1j * distance, 1.0, Core(model, 2.0))
    return site(Layout(DEPTH, shore=BANK, elements=(vortex,)))


def bank_intake(distance, discharge=1.0, current=0.5):
    sink = Sink("a", 1j * distance, discharge)
    return site(Layout(DEPTH, ambient=Ambient(current + 0j), shore=BANK, elements=(sink,)))


def still_channel(net, velocity=0j):
    elements = (Source("a", 5j, net),)
    return site(Layout(DEPTH, ambient=Ambient(velocity), shore=Channel(0j, 1 + 0j, 20.0), elements=elements))


def long_layout(extent):
    # 0.3 h / c_f = 0.3 * 4 / 0.005 = 240 m
    elements = (Sink("a", 0j, 1.0), Sink("b", 10 + 5j, 1.0))
    layout = replace(CURRENT, elements=elements, structures=(Pier("P", extent + 0j, 1.0),))
    return site(layout, SiteData(bed_friction=0.005))


def mixing(discharge):
    # c_f = 0.01, h = 4: sigma = sqrt(2 * 0.6 * 4 * 0.1 * 100 / 3) = 4 m over 100 / 3 m; w / 4 = Q / 8 m
    elements = (Source("works", 0j, 1.0), Sink("town", complex(100.0 / 3.0), discharge))
    return site(replace(CURRENT, elements=elements), SiteData(bed_friction=0.01))


def windy(speed):
    return site(CURRENT, SiteData(wind_speed=speed))


def uneven(largest):
    return site(Layout(5.0), SiteData(depth_range=(4.0, largest)))


def turning(vorticity):
    return site(Layout(DEPTH, ambient=Ambient(gradient=((0.0, 0.0), (vorticity, 0.0)))))


def lined(cls=LineSink):
    return site(replace(CURRENT, elements=(cls("bay", 0j, 6 + 8j, 1.0),)))


def known_opening(share):
    # error of the depth mean at mid-depth, 2 sum x K1(x) over even modes, is 0.01 at `share` = 1
    def excess(r):
        return sum(2.0 * n * math.pi * r * k1(n * math.pi * r) for n in (2, 4, 6, 8, 10)) - 0.01

    distance = DEPTH * brentq(excess, 0.5, 2.0, xtol=1e-13)
    layout = replace(CURRENT, elements=(Sink("a", 0j, 1.0),))
    points = np.array([complex(distance * share), 50j])
    return site(layout, SiteData(elevations={"a": DEPTH / 2}), Readings(points))


def tidal(period, body=None):
    # KC = U T / D = 0.5 T / 3
    layout = replace(CURRENT, structures=(body or Pier("P", 0j, 1.5),))
    return site(layout, SiteData(tidal_period=period))


def on_the_earth(rossby, latitude=90.0):
    # Ro = U / (2 Omega sin(latitude) L), L = 1 km
    layout = Layout(
        DEPTH,
        ambient=Ambient(complex(rossby * (2.0 * EARTH_RATE * 1000.0))),
        elements=(Sink("a", 0j, 1.0), Sink("b", 1000 + 0j, 1.0)),
    )
    return site(layout, SiteData(latitude=latitude))


def apart(extent, data=None):
    return site(replace(CURRENT, elements=(Sink("a", 0j, 1.0), Sink("b", extent + 0j, 1.0))), data)


def density_for(reduced):
    return reduced * water_properties(10.0, 0.0).density / 9.80665


def layered(distance, discharge=0.5, reduced=0.0146682):
    data = SiteData(
        density_difference=density_for(reduced), interface_elevation=distance, elevations={"a": 0.0}
    )
    return site(replace(CURRENT, elements=(Sink("a", 0j, discharge),)), data)


def buoyant(number, current=0.5):
    # g' h / U^2
    excess = -density_for(number * 0.25 / DEPTH)
    layout = Layout(DEPTH, ambient=Ambient(current + 0j), elements=(Source("works", 0j, 2.0),))
    return site(layout, SiteData(excess_densities={"works": excess}))


def salty(data=None, salinity=30.0):
    layout = replace(CURRENT, water=Water(10.0, salinity), structures=(Pier("P", 0j, 1.5),))
    return site(layout, data)


def solved(bound, tolerance=1e-4):
    return site(Layout(DEPTH, tolerance=tolerance), readings=Readings(boundary_bound=bound))


def cut_at(degrees, profile=EdgeProfile.EQUIPOTENTIAL):
    # water of 100 m by 50 m; its left side is an open edge that meets the lower bank at that angle
    top = 50.0 * np.exp(1j * math.radians(degrees))
    outer = (0j, 100 + 0j, 100 + 50j, complex(top))
    return site(Layout(DEPTH, shore=Surveyed(outer, (), (OpenEdge("upper reach", 3, 1, 5.0, profile),))))
