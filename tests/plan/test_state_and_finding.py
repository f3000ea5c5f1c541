"""States, vectors and findings."""

from __future__ import annotations

import pytest

from planner.plan import ZERO, Coil, CoilMode, Finding, Kind, State, along_z, magnitude, worst
from tests.plan.plans import DRIVEN, REST


@pytest.mark.parametrize(
    ("vector", "length"),
    [(ZERO, 0.0), (along_z(-7.3), 7.3), ((0.1, 0.0, 0.0), 0.1), ((3.0, 4.0, 0.0), 5.0), ((1.0, 2.0, -2.0), 3.0)],
)
def test_the_length_of_a_vector(vector: tuple[float, float, float], length: float) -> None:
    assert magnitude(vector) == pytest.approx(length, rel=1e-15)


def test_along_an_axis_the_length_is_exact() -> None:
    assert magnitude(along_z(-0.1)) == 0.1
    assert magnitude((0.0, 1e-200, 0.0)) == 1e-200


def test_a_coil_at_rest_carries_nothing() -> None:
    assert Coil() == Coil(ZERO, CoilMode.ZERO, ZERO, None)


def test_states_are_values() -> None:
    again = State(DRIVEN.coil, REST.stage, REST.gates_V, REST.light, REST.fills)
    assert again == DRIVEN
    assert len({REST, DRIVEN, again}) == 2


def test_the_worst_of_several_findings() -> None:
    def found(*kinds: Kind) -> list[Finding]:
        return [Finding("rule", kind, "text") for kind in kinds]

    assert worst([]) is None
    assert worst(found(Kind.NOTE)) is Kind.NOTE
    assert worst(found(Kind.NOTE, Kind.WARN)) is Kind.WARN
    assert worst(found(Kind.WARN, Kind.POLICY, Kind.NOTE)) is Kind.POLICY
    assert worst(tuple(found(Kind.NOTE, Kind.STOP, Kind.POLICY))) is Kind.STOP
