"""The one table that all the programs here fill."""

import time

WIDTHS = "{:<9} {:<14} {:<24} {:>7} {:>9} {:>9} {:>9}  {}"
REPEATS = 3


def heading():
    print(WIDTHS.format("problem", "mesh", "way", "threads", "seconds", "cpu", "off by", "more"), flush=True)


def row(problem, mesh, way, threads, seconds, cpu, off, more):
    print(WIDTHS.format(problem, mesh, way, threads, f"{seconds:.3f}", f"{cpu:.3f}", off, more), flush=True)


def quickest(run):
    """Its processor seconds and what the quickest of some runs gave; `run` returns its seconds first.

    The least, because whatever else the machine does can only add.
    """
    runs = []
    for _ in range(REPEATS):
        before = time.process_time()
        answer = run()
        runs.append((time.process_time() - before, answer))
    return min(runs, key=lambda run: run[1][0])


def first_that_holds(errors, bound):
    """Number of the first mesh from which on, to the finest, the error keeps within the bound."""
    first = len(errors)
    while first > 0 and abs(errors[first - 1]) <= bound:
        first -= 1
    return first


if __name__ == "__main__":
    heading()
