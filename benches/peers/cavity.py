"""Square cavity, left wall hot, right wall cold, Rayleigh number 1e6, by finite elements.

In heights, alpha/height and the difference of the wall temperatures:

    div u = 0
    u.grad u = -grad p + Pr div grad u + Ra Pr T e_y
    u.grad T = div grad T

Quadrilaterals with velocity and temperature of degree 3, pressure of degree 2, all continuous; full
Newton, Rayleigh number raised tenfold at a time, each step from the solution before it.

The mean Nusselt number is the heat that the discrete equations send through the hot wall: their
energy residual weighted with a function that is 1 on that wall and 0 on the other.
"""

import sys
import time

import ngsolve as ng
from ngsolve import grad

from lines import graded
from newton import newton
from rows import first_that_holds, quickest, row
from sections import rectangles

PRANDTL = 0.71
LADDER = [1e4, 1e5, 1e6]
# Le Quere, Computers & Fluids 20 (1991) 29-41; tests/reference/square-cavity.csv. De Vahl Davis,
# Int. J. Numer. Methods Fluids 3 (1983) 249-264, who set the problem, gives 8.800 and 219.36.
NU_MEAN, V_MAX = 8.8252, 220.565
BOUND = 1e-3
# Cells along each axis; the strength that did best of 1.2, 1.5, 1.8 and 2.1.
MESHES = [4, 6, 8, 10, 12, 16]
STRENGTH = 1.5


def wall(x, _y, _here, there):
    if there is not None:
        return None
    return {0.0: "hot", 1.0: "cold"}.get(x, "adiabatic")


def solve(cells, threads):
    """Mean Nusselt number, largest upward speed on y = 1/2, unknowns, Newton steps."""
    lines = graded(0.0, 1.0, cells, STRENGTH)
    mesh = rectangles(lines, lines, lambda _x, _y: "air", wall)
    space = ng.FESpace(
        [
            ng.VectorH1(mesh, order=3, dirichlet="hot|cold|adiabatic"),
            ng.H1(mesh, order=2),
            ng.H1(mesh, order=3, dirichlet="hot|cold"),
        ]
    )
    # Pressure is known up to a constant: zero in one corner.
    for free in (space.FreeDofs(), space.FreeDofs(coupling=True)):
        free.Clear(space.Range(1).start)
    (u, p, t), (v, q, s) = space.TnT()
    rayleigh = ng.Parameter(LADDER[0])
    form = ng.BilinearForm(space, condense=True)
    form += (
        ng.InnerProduct(grad(u) * u, v)
        + PRANDTL * ng.InnerProduct(grad(u), grad(v))
        - p * ng.div(v)
        - q * ng.div(u)
        - rayleigh * PRANDTL * t * v[1]
    ) * ng.dx
    form += (u * grad(t) * s + grad(t) * grad(s)) * ng.dx
    state = ng.GridFunction(space)
    state.components[2].Set(1.0 - ng.x)
    steps = 0
    for value in LADDER:
        rayleigh.Set(value)
        steps += newton(form, state, 1e-6 if value == LADDER[-1] else 3e-2, 20, threads)

    weight = ng.GridFunction(space)
    weight.components[2].Set(1.0, definedon=mesh.Boundaries("hot"))
    residual = state.vec.CreateVector()
    form.Apply(state.vec, residual)
    nusselt = ng.InnerProduct(residual, weight.vec)
    velocity = state.components[0]
    rising = max(velocity(mesh(0.0005 * k, 0.5))[1] for k in range(20, 200))
    return nusselt, rising, sum(space.FreeDofs()), steps


def timed(cells, threads):
    start = time.perf_counter()
    answer = solve(cells, threads)
    return time.perf_counter() - start, *answer


def main(threads):
    ng.SetNumThreads(threads)
    runs = [quickest(lambda cells=cells: timed(cells, threads)) for cells in MESHES]
    errors = [nusselt / NU_MEAN - 1.0 for _, (_, nusselt, *_) in runs]
    first = first_that_holds(errors, BOUND)
    for k, (cpu, (seconds, nusselt, rising, unknowns, steps)) in enumerate(runs):
        more = f"mean Nu {nusselt:.4f}, v_max {rising / V_MAX - 1.0:+.2%}, unknowns {unknowns}, steps {steps}"
        more += f"  <- smallest within {BOUND:.1%} of Nu" if k == first else ""
        mesh = f"{MESHES[k]}^2"
        row("cavity", mesh, "NGSolve, Newton", threads, seconds, cpu, f"{errors[k]:+.3%}", more)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 1)
