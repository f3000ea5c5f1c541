"""One way through the vertices: a circuit through start and end, every take at most once, copies in turn."""

from __future__ import annotations

from planner.optimise.cpsat.variables import DEPOT, Variables


def build(variables: Variables, *, musts: bool) -> None:
    """Add the circuit, one node a take (exactly one for a must if ``musts``), precedence and the turn of copies."""
    model = variables.model
    if not variables.light:
        nothing = model.new_bool_var("nothing done")
        loops = [(v, v, ~done) for v, done in enumerate(variables.done) if v != DEPOT]
        model.add_circuit([*variables.arcs, *loops, (DEPOT, DEPOT, nothing)])
        variables.nothing = nothing
    for take in range(variables.problem.takes):
        visits = variables.visits(take)
        if musts and variables.problem.must[take]:
            model.add_exactly_one(visits)
        elif len(visits) > 1:
            model.add_at_most_one(visits)
    for first, then in variables.problem.before_after.tolist():
        model.add(sum(variables.visits(then)) <= sum(variables.visits(first)))
    for v in range(2, len(variables.vertex_node)):
        if variables.copy_of[v] > 0:
            model.add_implication(variables.done[v], variables.done[v - 1])
    for v, poured in variables.poured.items():
        model.add(poured == 0).only_enforce_if(~variables.done[v])
