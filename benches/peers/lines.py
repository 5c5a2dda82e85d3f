"""Lines along one axis, graded as Ventrise's own sample problems are."""

import numpy as np


def graded(low, high, cells, strength):
    """Lines from low to high, closer at both ends; the larger the strength the closer.

    x(s) = low + (high - low)/2 * (1 + tanh(strength*(2s - 1)) / tanh(strength)), s = 0 to 1;
    uniform for strength 0.
    """
    s = np.linspace(0.0, 1.0, cells + 1)
    if strength > 0.0:
        s = 0.5 * (1.0 + np.tanh(strength * (2.0 * s - 1.0)) / np.tanh(strength))
    lines = low + (high - low) * s
    # The ends to the last bit, so that neighbouring segments meet.
    lines[0], lines[-1] = low, high
    return lines


def joined(edges, cells, strength):
    """Segments between edges, each graded at both ends."""
    parts = [graded(a, b, n, strength)[:-1] for a, b, n in zip(edges, edges[1:], cells, strict=False)]
    return np.append(np.concatenate(parts), edges[-1])
