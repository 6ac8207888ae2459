"""The whole job as a user would otherwise write it with SciPy.

Every ladder of three lossless inductors and capacitors: differential evolution on the worst return
loss, a simplex to finish, the E24 neighbours of every value, and Monte Carlo of the best network.
"""

import itertools

import numpy as np
from scipy.optimize import differential_evolution, minimize

import numpy_ladder as nl

E24 = [1.0, 1.1, 1.2, 1.3, 1.5, 1.6, 1.8, 2.0, 2.2, 2.4, 2.7, 3.0,
       3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1]
SEARCH_POINTS = 101
CHECK_POINTS = 4001


def ladders(elements):
    """Every alternating ladder, as slots from the source to the load."""
    for first in ("series", "shunt"):
        other = "shunt" if first == "series" else "series"
        for kinds in itertools.product("LC", repeat=elements):
            yield [((first, other)[i % 2], kind) for i, kind in enumerate(kinds)]


def value_ranges(slots, centre_hz):
    """Values whose reactance at the centre lies between 1/50 and 50 times the source's."""
    omega = 2 * np.pi * centre_hz
    low, high = nl.SOURCE_OHM / 50, nl.SOURCE_OHM * 50
    return [(low / omega, high / omega) if kind == "L" else
            (1 / (omega * high), 1 / (omega * low)) for _, kind in slots]


def e24_neighbours(value):
    """The preferred values below and above."""
    decade = 10.0 ** np.floor(np.log10(value))
    around = [m * decade * s for s in (0.1, 1, 10) for m in E24]
    return max(v for v in around if v <= value * 1.0000001), min(v for v in around if v > value)


def search(ladder, ranges, seed, whole_population):
    """The best values found in log space."""
    bounds = [(np.log(a), np.log(b)) for a, b in ranges]
    cost = lambda point: -ladder.worst_return_loss_db(np.exp(point))
    if whole_population:
        costs = lambda points: -ladder.worst_of_boards_db(np.exp(points.T), chunk=len(points.T))
        found = differential_evolution(costs, bounds, seed=seed, polish=False, vectorized=True,
                                       updating="deferred")
    else:
        found = differential_evolution(cost, bounds, seed=seed, polish=False)
    finished = minimize(cost, found.x, method="Nelder-Mead", bounds=bounds,
                        options={"xatol": 1e-5, "fatol": 1e-5, "maxiter": 2000})
    return np.exp(finished.x if finished.fun < found.fun else found.x)


def run(antenna, elements=3, samples=10000, seed=1, whole_population=False):
    """The best E24 network, its worst return loss on the check grid, and its yield."""
    file, from_hz, to_hz, goal_db = nl.ANTENNAS[antenna]
    grid = np.linspace(from_hz, to_hz, SEARCH_POINTS)
    reflection = nl.load_reflection(file, grid)
    best = (-np.inf, None, None)
    for slots in ladders(elements):
        ladder = nl.Ladder(slots, reflection, grid)
        values = search(ladder, value_ranges(slots, np.sqrt(from_hz * to_hz)), seed,
                        whole_population)
        for rounded in itertools.product(*[e24_neighbours(v) for v in values]):
            best = max(best, (ladder.worst_return_loss_db(rounded), slots, rounded),
                       key=lambda b: b[0])
    _, slots, values = best
    boards = nl.drawn_boards(values, [0.05] * elements, samples, np.random.default_rng(seed))
    judged = nl.Ladder(slots, reflection, grid).worst_of_boards_db(boards)
    fine = np.linspace(from_hz, to_hz, CHECK_POINTS)
    checked = nl.Ladder(slots, nl.load_reflection(file, fine), fine)
    return {"return_loss_db": float(checked.worst_return_loss_db(values)),
            "yield": float(np.mean(judged >= goal_db)), "slots": slots, "values": values}
