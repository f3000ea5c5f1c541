"""The problem the optimiser solves, as arrays: no tesla, no kelvin, no names.

**Nodes** are things to do. A *take node* covers one or more takes (the same take may be covered by several
nodes: its alternatives; at most one of them is chosen). A *service node* covers none, may be used up to
``max_uses`` times and may refill a reservoir. ``start`` and ``end`` are nodes without takes; ``end`` stands for
the wanted end state. Every node is entered in one *place* and left in one place (places are numbered states).

**Arcs** lead from one place to another and are short lists of **blocks**. A node too is a list of blocks
(``start`` and ``end`` have none of their own). A block has

- ``seconds``; the *calendar* inside one interval of which it must lie as a whole (-1: any time; ending exactly
  at the interval's finish is inside);
- ``use``: what it takes from each reservoir in total, evenly over its length;
- ``start_min``: the level each reservoir must have when it starts; ``end_min``: when it ends;
- for the wait that may follow it: ``wait_ok`` (arc blocks: always), ``wait_rate`` per second and ``wait_min``,
  the level each reservoir must still have when the wait ends. A wait of zero seconds has no rule. What stands
  here for the last block of an arc or a node is not read: waits there are the place's (below).

All rates are zero or more.

**Meaning of an order** (a sequence of nodes without ``start`` and ``end``). Time starts at 0 in ``start``, whose
wait rates and minima are those of its place. For each node in turn the arc's blocks, then the node's own blocks
are done, each starting as early as its calendar allows. Blocks joined by ``wait_ok = False`` are one chain that
starts at the earliest moment at which every link fits its own calendar without a gap. Waits burn at the rate of
the block (or place) before them. Then, for each arc, waits are **shifted**: with the start of the node's first
block kept (for ``end``, which has no blocks: the end of the arc), going from the arc's last block back to its
first, a block is pushed as late as its calendar allows if *some* earlier gap of this arc burns less (priced sum
over reservoirs) than the gap after the block. The shifted times are kept if the waits then burn strictly less
and no rule of the arc or of the node it leads to is broken by them (for a refill: it still agrees at the start
kept, with the levels the shifted times give), else the unshifted ones stand (and must keep the rules). "Less" is
by more than ``TOLERANCE``.

A place has waits of its own: ``place_wait_rate`` and ``place_wait_min`` hold after a node that ends in it, before
the arc's first block, and after the last block of an arc that leads to it. On an arc without blocks the wait is
that of the place left.

An arrival counts from its second on and is not cut off at the capacity. Every service starts and ends in a place
like any other node.

**Refills.** A service node with ``refill_reservoir >= 0`` has one block of ``ceil(seconds + seconds_per_unit *
poured)``. ``poured = min(refill_to - level at its start, (source level - source_fixed) / source_per_unit)``;
it must be at least ``min_pour``; if ``need_full`` the service waits until the source holds enough for the whole
(arrivals of the source are known in advance). The source falls by ``source_fixed + source_per_unit * poured`` at the
start, the reservoir rises by ``poured`` at the end, its own ``use`` being taken too. With
``source = -1`` nothing is drawn. The earliest start is the least moment at which calendar, source and length agree:
the source holds enough (for the whole if ``need_full``, else for ``min_pour``) and the length that results fits the
calendar. A reservoir that is then too full for ``min_pour`` is not waited for: the refill is infeasible there. Lengths
are rounded up with a microsecond forgiven.

**Feasible**: everything ends by ``horizon``; every level rule holds; the final wait in the end place until
``horizon`` keeps its ``place_wait_min`` (also if it is zero seconds long); all ``must`` takes are done; precedences
hold (``after`` is done only if ``before`` was done by an earlier node); no take is done twice and no service more
than ``max_uses`` times.

**Objective**, staged: most prize; then least ``cost = moving seconds + sum(price * used)``; then the earliest end.
Moving seconds are the seconds of all arc blocks and of the nodes with ``moving``. Used is what waits, blocks and
the final wait took from each reservoir plus what refilling lost on the way, ``source_fixed + (source_per_unit - 1)
* poured``, at the price of the reservoir refilled (reservoirs with price 0 do not count;
the loss counts with ``source = -1`` too).
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

Ints = npt.NDArray[np.int64]
Floats = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]

TOLERANCE = 1e-9  # of a level, in units of the reservoir: a line that is reached exactly is kept


@dataclass(frozen=True)
class Blocks:
    """Blocks of many owners: arrays of shape ``(*owners, k)`` and, per reservoir, ``(*owners, k, reservoirs)``."""

    count: Ints
    seconds: Ints
    calendar: Ints
    use: Floats
    start_min: Floats
    end_min: Floats
    wait_ok: Bools
    wait_rate: Floats
    wait_min: Floats


@dataclass(frozen=True)
class Calendars:
    """Sorted, disjoint half-open intervals ``[begin, finish)``; calendar ``c`` owns rows ``first[c]:first[c + 1]``."""

    first: Ints
    begin: Ints
    finish: Ints


@dataclass(frozen=True)
class Reservoirs:
    """Levels at time 0, capacities, prices in seconds a unit, and amounts that arrive at known times (sorted)."""

    level: Floats
    capacity: Floats
    price: Floats
    arrival_reservoir: Ints
    arrival_second: Ints
    arrival_amount: Floats


@dataclass(frozen=True)
class Services:
    """Per node (shape ``nodes``); rows of take nodes are ``max_uses = 0`` and ``refill_reservoir = -1``."""

    max_uses: Ints
    refill_reservoir: Ints
    refill_to: Floats
    seconds_per_unit: Floats
    min_pour: Floats
    need_full: Bools
    source: Ints
    source_per_unit: Floats
    source_fixed: Floats


@dataclass(frozen=True)
class Problem:
    """See the module docstring for the meaning of every part.

    Node 0 is ``start``, node 1 is ``end``. ``covers[n]`` lists the takes node ``n`` does.
    Shapes: ``entry``, ``exit``, ``moving`` (nodes,); ``node_blocks`` owners (nodes,); ``arc_blocks`` owners
    (places, places) as [from, to]; ``prize`` and ``must`` (takes,); ``before_after`` (pairs, 2) of takes.
    """

    horizon: int
    entry: Ints
    exit: Ints
    moving: Bools
    covers: tuple[tuple[int, ...], ...]
    node_blocks: Blocks
    arc_blocks: Blocks
    place_wait_rate: Floats
    place_wait_min: Floats
    calendars: Calendars
    reservoirs: Reservoirs
    services: Services
    prize: Ints
    must: Bools
    before_after: Ints = field(default_factory=lambda: np.zeros((0, 2), dtype=np.int64))

    START = 0
    END = 1

    @property
    def nodes(self) -> int:
        """How many nodes there are, start and end included."""
        return len(self.covers)

    @property
    def takes(self) -> int:
        """How many takes there are."""
        return len(self.prize)
