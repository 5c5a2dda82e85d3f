"""Full Newton with static condensation and a sparse direct solver."""

import contextlib

import ngsolve as ng
import numpy as np


def newton(form, state, tolerance, most, threads):
    """Solves form(state) = 0, starting from the state; returns the number of steps.

    Ends when no component of the state (velocity, pressure, temperature) changes in a step by more
    than tolerance times itself, both in the Euclidean norm of its coefficients.

    The form must have been built with `condense=True`: unknowns inside elements are eliminated
    there. The factors are UMFPACK's; with several threads the library's own are at rest meanwhile,
    or they would take the cores from those of the dense kernels.
    """
    space = form.space
    parts = [space.Range(k) for k in range(len(state.components))]
    residual = state.vec.CreateVector()
    change = state.vec.CreateVector()
    for step in range(1, most + 1):
        with ng.TaskManager() if threads > 1 else contextlib.nullcontext():
            form.Apply(state.vec, residual)
            form.AssembleLinearization(state.vec)
        factors = form.mat.Inverse(space.FreeDofs(coupling=True), inverse="umfpack")
        residual.data += form.harmonic_extension_trans * residual
        change.data = factors * residual
        change.data += form.inner_solve * residual
        change.data += form.harmonic_extension * change
        state.vec.data -= change
        moved = max(_norm(change, part) / max(_norm(state.vec, part), 1e-300) for part in parts)
        if not np.isfinite(moved):
            raise ArithmeticError(f"Newton: step {step} is not finite")
        if moved <= tolerance:
            return step
    raise ArithmeticError(f"Newton: change {moved:.1e} after {most} steps")


def _norm(vector, part):
    return np.linalg.norm(vector.FV().NumPy()[part.start : part.stop])
