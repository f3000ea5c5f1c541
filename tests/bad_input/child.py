"""Runs command lines one after the other in this process and reports, for each, how it ended and what it used.

Started as ``python -m tests.bad_input.child CASES.json REPORT.json``; a case is a folder and a line.
"""

from __future__ import annotations

import json
import resource
import sys
from pathlib import Path

from tests.cli.run import run

MOST_ADDRESSES = 3_000_000_000


def used_s() -> float:
    """Processor seconds of this process so far."""
    used = resource.getrusage(resource.RUSAGE_SELF)
    return used.ru_utime + used.ru_stime


def main() -> None:
    """Run the cases; the report is written after each, so that a case that ends the process is known."""
    resource.setrlimit(resource.RLIMIT_AS, (MOST_ADDRESSES, MOST_ADDRESSES))  # the machine is kept from harm
    cases, report = (Path(argument) for argument in sys.argv[1:])
    told: list[dict[str, object]] = []
    for folder, line in json.loads(cases.read_text(encoding="utf-8")):
        began_s = used_s()
        ran = run(Path(folder), *line)
        told.append(
            {
                "status": ran.status,
                "out": ran.out[:1000],
                "err": ran.err,
                "unchanged": ran.after == ran.before,
                "seconds": used_s() - began_s,
                "bytes": resource.getrusage(resource.RUSAGE_SELF).ru_maxrss * 1024,
            }
        )
        report.write_text(json.dumps(told), encoding="utf-8")


if __name__ == "__main__":
    main()
