"""Planar vented housing of tests/reference/vented-planar.toml by finite elements.

SI units, T the rise above ambient, p measured from the column of ambient air, u_n outward:

    div u = 0
    rho (u.grad) u = -grad p + div[mu (grad u + grad u^T)] + rho beta g T e_y
    rho cp u.grad T = div(k grad T) in air,   0 = div(k grad T) + heat/volume in the block

    slots, speed along the face zero:
      inflow    p = -(1 + K) rho u_n^2/2, entering air carries T = 0 and nothing is conducted
      outflow   p = +K rho u_n^2/2,       no normal gradient of T

With the speed along the face zero, mass conservation leaves du_n/dn = 0, so the normal stress in a
slot is -p and enters the momentum equation as it stands. The inflow condition enters the energy
equation as the heat rho cp |u_n| T that it takes to warm what comes in.

Quadrilaterals, velocity and temperature of degree 3, pressure of degree 2, all continuous; full
Newton. Viscosity and the air's conductivity are lowered in steps to their values, and the first
flow is that of air held near a guessed rise.
"""

import sys
import time
import tomllib
from pathlib import Path

import ngsolve as ng
import numpy as np
from ngsolve import grad

from lines import joined
from newton import newton
from rows import first_that_holds, quickest, row
from sections import rectangles

CASE = Path(__file__).parents[2] / "tests/reference/vented-planar.toml"
# tests/reference/housings.csv: rise of the block's hottest point [K], flow [m3/s].
RISE, FLOW = 15.8009, 1.9642e-3
BOUND = 1e-3
GRAVITY = 9.81
# Multiples of the cells between edges: wall, slot, gap, block, gap, slot, wall; below, beside, above.
MESHES = [1, 2, 3, 4]
ACROSS, UP = [1, 2, 1, 3, 1, 2, 1], [3, 4, 3]
# The strength that did best of 1.2, 1.6, 2.0 and 2.4.
STRENGTH = 2.4
LADDER = [10.0, 3.0, 1.0]
GUESSED_RISE, HELD_FOR = 8.0, 0.3


def si(text):
    """Number of a quantity of the case; lengths in mm, all else already in SI."""
    number, unit = text.split(" ", 1)
    return float(number) * (1e-3 if unit == "mm" else 1.0)


def solve(multiple, threads):
    """Highest rise, flow, heat through the slots over heat released, unknowns, Newton steps."""
    case = tomllib.loads(CASE.read_text())
    (block,), slots = case["block"], case["slot"]
    (material,), air = case["material"], case["air"]
    left, right = map(si, block["x"])
    low, high = map(si, block["y"])
    width, height = si(case["section"]["width"]), si(case["section"]["height"])
    spans = sorted({(si(slot["from"]), si(slot["to"])) for slot in slots})
    (loss,) = {slot["loss"] for slot in slots}
    x_edges = [0.0, *spans[0], left, right, *spans[1], width]
    xs = joined(x_edges, [multiple * n for n in ACROSS], STRENGTH)
    ys = joined([0.0, low, high, height], [multiple * n for n in UP], STRENGTH)

    def inside(x, y):
        return "block" if left < x < right and low < y < high else "air"

    def edge(x, y, here, there):
        if there is not None:
            return "surface" if here != there else None
        in_slot = y in (0.0, height) and any(a < x < b for a, b in spans)
        return "slot" if in_slot else "wall"

    mesh = rectangles(xs, ys, inside, edge)
    in_air = ng.dx(definedon=mesh.Materials("air"))
    in_block = ng.dx(definedon=mesh.Materials("block"))
    in_slots = ng.ds(definedon=mesh.Boundaries("slot"))
    normal = ng.specialcf.normal(2)
    density, heat = si(air["density"]), si(block["heat"]) / si(case["section"]["depth"])
    capacity = density * si(air["specific-heat"])
    lift = density * si(air["expansion"]) * GRAVITY
    thick, held = ng.Parameter(LADDER[0]), ng.Parameter(capacity / HELD_FOR)
    viscosity, conductivity = thick * si(air["viscosity"]), thick * si(air["conductivity"])

    space = ng.FESpace(
        [
            ng.VectorH1(mesh, order=3, definedon="air", dirichlet="wall|surface", dirichletx="slot"),
            ng.H1(mesh, order=2, definedon="air"),
            ng.H1(mesh, order=3),
        ]
    )
    (u, p, t), (v, q, s) = space.TnT()
    out = u * normal
    form = ng.BilinearForm(space, condense=True)
    form += (
        density * ng.InnerProduct(grad(u) * u, v)
        + viscosity * ng.InnerProduct(grad(u) + grad(u).trans, grad(v))
        - p * ng.div(v)
        - q * ng.div(u)
        - lift * t * v[1]
    ) * in_air
    form += ng.IfPos(out, loss, -1.0 - loss) * 0.5 * density * out * out * (v * normal) * in_slots
    form += (capacity * (u * grad(t)) * s + conductivity * grad(t) * grad(s)) * in_air
    form += ng.IfPos(out, 0.0, -out) * capacity * t * s * in_slots
    form += held * (t - GUESSED_RISE) * s * in_air
    form += si(material["conductivity"]) * grad(t) * grad(s) * in_block
    form += -heat / ((right - left) * (high - low)) * s * in_block

    state = ng.GridFunction(space)
    state.components[2].Set(GUESSED_RISE)
    steps = newton(form, state, 3e-2, 20, threads)
    held.Set(0.0)
    for value in LADDER:
        thick.Set(value)
        steps += newton(form, state, 1e-6 if value == LADDER[-1] else 3e-2, 20, threads)

    velocity, _, rise = state.components
    points = np.meshgrid(between(xs, left, right), between(ys, low, high))
    highest = rise(mesh(points[0].ravel(), points[1].ravel())).max()
    leaving = ng.IfPos(velocity * normal, velocity * normal, 0.0)
    flow = ng.Integrate(leaving * in_slots, mesh)
    carried = capacity * ng.Integrate(leaving * rise * in_slots, mesh)
    return highest, flow, carried / heat, sum(space.FreeDofs()), steps


def between(lines, low, high):
    """Lines from low to high and three more within each gap; the ends just inside."""
    lines = lines[(lines >= low) & (lines <= high)]
    fine = np.interp(np.arange(0.0, len(lines) - 0.9, 0.25), np.arange(len(lines)), lines)
    return np.clip(fine, low + 1e-9, high - 1e-9)


def timed(multiple, threads):
    start = time.perf_counter()
    answer = solve(multiple, threads)
    return time.perf_counter() - start, *answer


def main(threads):
    ng.SetNumThreads(threads)
    runs = [quickest(lambda multiple=multiple: timed(multiple, threads)) for multiple in MESHES]
    rises = [run[1] / RISE - 1.0 for _, run in runs]
    flows = [run[2] / FLOW - 1.0 for _, run in runs]
    notes = {first_that_holds(rises, BOUND): f"  <- smallest within {BOUND:.1%} of the rise"}
    worst = [max(abs(a), abs(b)) for a, b in zip(rises, flows, strict=True)]
    notes.setdefault(first_that_holds(worst, BOUND), f"  <- smallest within {BOUND:.1%} of rise and flow")
    for k, (cpu, (seconds, highest, flow, heat, unknowns, steps)) in enumerate(runs):
        more = f"rise {highest:.4f} K, flow {flow:.4e} m3/s ({flows[k]:+.2%}), "
        more += f"heat out {heat - 1.0:+.2%}, unknowns {unknowns}, steps {steps}"
        mesh = f"{MESHES[k] * sum(ACROSS)} x {MESHES[k] * sum(UP)}"
        more += notes.get(k, "")
        row("housing", mesh, "NGSolve, Newton", threads, seconds, cpu, f"{rises[k]:+.3%}", more)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 1)
