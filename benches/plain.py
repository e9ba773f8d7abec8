"""The same work as the fused kernel in plain, vectorised NumPy, and with a linear-program solver for every unload.

    python3 -m venv /tmp/plain && /tmp/plain/bin/pip install numpy==2.4.6 scipy==1.17.1
    COUPLET_PYTHON=/tmp/plain/bin/python cargo bench --bench price

The bench writes the problem as raw doubles and calls this script with its folder. Answers go to standard output, one
`name value` a line.
"""

import os

# Two processes, one core each: set before NumPy starts its own threads.
os.environ["OPENBLAS_NUM_THREADS"] = "1"

import multiprocessing
import sys
import time
from pathlib import Path

import numpy as np
from scipy.optimize import linprog

FOLDER = Path(sys.argv[1])
SHAPE = [int(word) for word in (FOLDER / "shape").read_text().split()]
UNLOADS, FEATURES, VERTICES, THRUSTERS, LIFETIMES = SHAPE


def raw(name, *shape):
    return np.fromfile(FOLDER / name).reshape(shape)


BASIS = raw("basis", UNLOADS, FEATURES, 3)
PRICES = raw("prices", VERTICES, 3)
DRAWS = raw("draws", LIFETIMES, FEATURES)
WRENCH = raw("wrench", 6, THRUSTERS)
COST = raw("cost", THRUSTERS)


def straightforward(draws, unloads=64):
    """One product for the momentum of all unloads, one for the prices, a maximum; in chunks that fit the cache."""
    blocks = [
        np.ascontiguousarray(BASIS[k : k + unloads].transpose(1, 0, 2).reshape(FEATURES, -1)) for k in range(0, UNLOADS, unloads)
    ]
    total = np.zeros(len(draws))
    for block in blocks:
        momentum = draws @ block
        price = momentum.reshape(-1, 3) @ PRICES.T
        total += price.max(axis=1).reshape(len(draws), -1).sum(axis=1)
    return total


def rearranged(draws, unloads=64):
    """The same with lifetimes along the rows in memory, which suits the maximum: not what one writes first."""
    blocks = [np.ascontiguousarray(BASIS[k : k + unloads].transpose(2, 0, 1)) for k in range(0, UNLOADS, unloads)]
    columns = np.ascontiguousarray(draws.T)
    total = np.zeros(len(draws))
    for block in blocks:
        momentum = (block.reshape(-1, FEATURES) @ columns).reshape(3, -1)
        total += (PRICES @ momentum).max(axis=0).reshape(-1, len(draws)).sum(axis=0)
    return total


def program(draws):
    """A linear program for every unload: least propellant, its torque given, no net force. The first unloads only."""
    total = 0.0
    for draw in draws:
        for window in BASIS[:SOLVED]:
            right = np.concatenate([draw @ window, np.zeros(3)])
            total += linprog(COST, A_eq=WRENCH, b_eq=right, method="highs").fun
    return total


SOLVED = 100


def best_of(work, parts, repeats):
    """Seconds of the fastest of some runs on two processes, started before the clock."""
    with multiprocessing.Pool(2) as pool:
        pool.map(work, [part[:1] for part in parts])
        times = []
        for _ in range(repeats):
            start = time.perf_counter()
            answers = pool.map(work, parts, chunksize=1)
            times.append(time.perf_counter() - start)
    return min(times), answers


def peak(size=1024):
    """Rate of a square matrix product on one core, floating-point operations a second."""
    a = np.random.default_rng(1).standard_normal((size, size))
    times = []
    for _ in range(8):
        start = time.perf_counter()
        a @ a
        times.append(time.perf_counter() - start)
    return 2 * size**3 / min(times)


def both_peaks(_):
    return peak()


def main():
    parts = [DRAWS[k : k + 64] for k in range(0, LIFETIMES, 64)]
    for name, work in [("straightforward", straightforward), ("rearranged", rearranged)]:
        seconds, answers = best_of(work, parts, 3)
        print(name, LIFETIMES / seconds)
        print(name + "_sum", float(np.concatenate(answers).sum()))
    seconds, answers = best_of(program, [DRAWS[:1], DRAWS[1:2]], 2)
    print("program", 2 * SOLVED / UNLOADS / seconds)
    print("program_sum", float(sum(answers)))
    with multiprocessing.Pool(2) as pool:
        print("peak", sum(pool.map(both_peaks, [0, 1], chunksize=1)))


if __name__ == "__main__":
    main()
