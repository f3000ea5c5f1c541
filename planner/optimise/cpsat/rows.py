"""Weighted sums over everything that is done, with whole weights rounded towards what keeps every order feasible."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
from ortools.sat.python import cp_model

from planner.optimise.cpsat.variables import POUR_SCALE, Variables
from planner.optimise.problem import Floats


def total(
    variables: Variables, arc: Floats, node: Floats, pour: dict[int, float], scale: float, *, end: float = 0.0
) -> cp_model.LinearExpr:
    """A sum that is at most ``scale`` times the true one: weights of arcs (P, P), nodes (N,) and pours (by node).

    ``end`` is added once; the arc from start to end directly counts as nothing else being done.
    """
    variables.breathe()
    leave, enter = variables.places()
    node = node.astype(np.float64)
    if variables.light:
        into = arc[variables.problem.exit].min(axis=0)[variables.problem.entry]
        node = node + into
        end += float(into[variables.problem.END])
    literals: list[Any] = [literal for _, _, literal in variables.arcs]
    weights = [math.floor(w * scale + 1e-9) for w in np.asarray(arc)[leave, enter].tolist()] if leave else []
    constant = math.floor(end * scale)
    problem = variables.problem
    if variables.nothing is not None:
        direct = float(arc[problem.exit[problem.START], problem.entry[problem.END]])
        literals.append(variables.nothing)
        weights.append(math.floor(direct * scale))
    for v, done in enumerate(variables.done):
        if v == 0:
            continue
        n = variables.vertex_node[v]
        weight = float(node[n]) * scale
        if v in variables.poured and pour.get(n):
            each = pour[n] * scale / POUR_SCALE
            literals.append(variables.poured[v])
            weights.append(math.floor(each))
            # the true amount lies between the counted one and one hundredth more
            weight += min(0.0, each)
        literals.append(done)
        weights.append(math.floor(weight + 1e-9))
    return cp_model.LinearExpr.weighted_sum(literals, weights) + constant
