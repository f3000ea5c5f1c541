"""Physics knows nothing of plans, costs little to import, and takes arrays as well as numbers."""

from __future__ import annotations

import pkgutil
import subprocess
import sys

import numpy as np
import pytest

from planner import physics
from planner.errors import OutOfRangeError
from planner.physics import fillings, helium, lockin, magnet, nbti, ranges

MODULES = sorted(module.name for module in pkgutil.iter_modules(physics.__path__))


@pytest.mark.parametrize("module", MODULES)
def test_imports_nothing_of_the_program_and_nothing_heavy(module: str) -> None:
    script = (
        f"import sys, planner.physics.{module}\n"
        "mine = {n for n in sys.modules if n.startswith('planner.')} - {'planner.errors', 'planner.physics'}\n"
        "assert all(n.startswith('planner.physics.') for n in mine), mine\n"
        "heavy = {'scipy.special', 'scipy.optimize', 'scipy.integrate', 'pandas', 'CoolProp'} & set(sys.modules)\n"
        "assert not heavy, heavy\n"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (fillings.field_for_filling_T, (1e15, 2.0)),
        (lockin.settle_time_s, (0.3, 4)),
        (helium.boil_off_L_per_h, (1.0,)),
        (helium.gas_volume_m3, (39.0,)),
        (magnet.ramp_time_s, (0.0, 8.0, [9.0], [0.005])),
        (nbti.SET_A.critical_A_per_m2, (5.0, 4.2)),
    ],
)
def test_a_number_gives_a_number_and_an_array_an_array_of_the_same(function, arguments) -> None:  # type: ignore[no-untyped-def]
    alone = function(*arguments)
    assert type(alone) is float
    together = function(np.full((2, 3), arguments[0]), *arguments[1:])
    assert together.shape == (2, 3)
    assert together == pytest.approx(np.full((2, 3), alone))


@pytest.mark.parametrize("bad", [np.nan, np.inf, -np.inf, -1.0, [1.0, -1.0]])
def test_a_range_names_the_value_it_refuses(bad: object) -> None:
    with pytest.raises(OutOfRangeError, match=r"mass_kg = (nan|inf|-inf|-1) is outside \(0, inf\]: no mass"):
        ranges.positive("mass_kg", bad, because="no mass")  # type: ignore[arg-type]
