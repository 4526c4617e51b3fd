"""The rows that the tally reads and the books that it keeps: one name for each column.

Rows are immutable and hold the numbers of a design and its plan as they were written. Books are lists of numbers that
the tally fills; for many designs at once the numbers in both are such that write down what is done with them (`_tape`).
Indices and flags are integers, quantities are floats in SI units. Rows are structs and no named tuples, since reading
an attribute of a struct costs Python a quarter of the time, and making one a quarter too.
"""

from collections.abc import Sequence
from typing import Final

from msgspec import Struct

__all__ = [
    "BLANK",
    "LINE_WIDTH",
    "NO_TABLES",
    "Books",
    "BranchRow",
    "BurnerRow",
    "EngineRow",
    "FeedRow",
    "ItemRow",
    "LegRow",
    "LoadRow",
    "PayloadRow",
    "StageRow",
    "StepRow",
    "Tables",
]

# What a step does.
BEGIN: Final = 0
COAST: Final = 1
BURN: Final = 2
DRAW: Final = 3
SEPARATE: Final = 4
RELEASE_PAYLOAD: Final = 5
RELEASE_PROPELLANT: Final = 6
TAKE_PAYLOAD: Final = 7
TAKE_PROPELLANT: Final = 8
DOCK: Final = 9
END: Final = 10
START: Final = 11

# What a burn is for.
MANOEUVRE: Final = 0
CONTINGENCY: Final = 1
RESERVE: Final = 2
UPKEEP: Final = 3
ADDITION: Final = 4
KILOGRAMS: Final = 5

# What a line of the ledger tells.
LINE_BURN: Final = 0
LINE_DRAW: Final = 1
LINE_IGNITION: Final = 2
LINE_SEPARATION: Final = 3
LINE_RELEASE: Final = 4
LINE_HANDED: Final = 5
LINE_TAKEN_PAYLOAD: Final = 6
LINE_TAKEN: Final = 7
LINE_BOILED: Final = 8
LINE_ABSENT: Final = 9
LINE_DOCKED: Final = 10

# Columns of a line; `PART` is a burner, engine, stage, payload or load, as the kind of line asks.
KIND: Final = 0
LEG: Final = 1
PART: Final = 2
PURPOSE: Final = 3
DELTA_V: Final = 4
KG: Final = 5
MASS: Final = 6
TIME: Final = 7
MASK: Final = 8
SPARE: Final = 9
LINE_WIDTH: Final = 10

# What could go on after the payer of a mark: nothing, the next stage alone, or more than the books can tell; or that
# what is spent below the payer drops before it pays.
NO_MORE: Final = 0
NEXT_STAGE: Final = 1
UNCLEAR: Final = 2
DROPS: Final = 3

# Why something is owed.
PAID: Final = 0
GONE: Final = 1
INERT: Final = 2
NO_IGNITION: Final = 3
DRY: Final = 4

# Counters of the books.
LINES: Final = 0
STAMP: Final = 1
ADD_AT: Final = 2
ROOM: Final = 3

NOT_FLOWN: Final = -1
"""`Books.where` of a part that has left and that no branch flies."""


class ItemRow(Struct, frozen=True, gc=False):
    """One item of a mass list; `part` counts the stages, then the payloads."""

    part: int
    mass: float
    count: int
    growth: float
    contingency: float


class StageRow(Struct, frozen=True, gc=False):
    """Where the loads and engines of a stage stand, and whether only a leg may separate it."""

    first_load: int
    end_load: int
    first_engine: int
    end_engine: int
    by_leg: int


class LoadRow(Struct, frozen=True, gc=False):
    """One load [kg], its capacity infinite where none is stated; boil-off [kg/d]."""

    stage: int
    mass: float
    capacity: float
    residual_fraction: float
    held_back: float
    boiloff_per_day: float


class EngineRow(Struct, frozen=True, gc=False):
    """One kind of engine: thrust of each [N], isp [s], loss of each [kg]; ignitions infinite where not limited."""

    count: int
    thrust: float
    isp: float
    loss_per_ignition: float
    max_ignitions: float
    auxiliary: int
    first_feed: int
    end_feed: int


class FeedRow(Struct, frozen=True, gc=False):
    """One load that an engine draws on, with its parts by mass."""

    load: int
    parts: float


class PayloadRow(Struct, frozen=True, gc=False):
    """The stage that a payload rides on (-1: the topmost), and whether it is aboard at the start."""

    stage: int
    aboard: int


class BurnerRow(Struct, frozen=True, gc=False):
    """The engines that an account lights on one stage: a slice of `Tables.lit`.

    Where that is one kind of engine that draws on one load, `lone` is that load and `mask` the engine's bit, since
    almost every burn is of that kind and then has a short way; -1 and 0 otherwise.
    """

    stage: int
    first_lit: int
    end_lit: int
    lone: int = -1
    mask: int = 0


class BranchRow(Struct, frozen=True, gc=False):
    """A branch: the stage that it is of (-1: main), its reserve, the step after its last."""

    part: int
    reserve_fraction: float
    reserve_delta_v: float
    end_step: int


class LegRow(Struct, frozen=True, gc=False):
    """A leg: its account, and what its contingency rule says.

    `rule` is -1 without a rule. `settles` marks the last leg of a category's floor in its branch, `reserves` the leg
    that the reserve of its branch follows, `charged` a leg that is charged a delta-v, `quiet` one in which handing over
    is not told.
    """

    branch: int
    account: int
    charged: int
    quiet: int
    rule: int
    fraction: float
    floor: float
    fixed: float
    floor_on_category: int
    settles: int
    reserves: int


class StepRow(Struct, frozen=True, gc=False):
    """One thing to do, in order.

    `amount` is a delta-v [m/s], a mass [kg] or a time [s], as `op` asks; in a docking, 1 if the docked branch is over.
    """

    op: int
    leg: int
    part: int
    amount: float
    count: int
    purpose: int


class Tables(Struct, frozen=True):
    """Everything that the tally reads.

    The counts stand beside the rows, since every burn asks for some, and to ask a list takes Python twice as
    long. `burner_of` is indexed account * stages + stage (-1: none), `last_named` branch * stages + stage and holds the
    last leg of the branch that names the stage as a payer (-1: none).
    """

    items: Sequence[ItemRow]
    stages: Sequence[StageRow]
    loads: Sequence[LoadRow]
    engines: Sequence[EngineRow]
    feeds: Sequence[FeedRow]
    payloads: Sequence[PayloadRow]
    burners: Sequence[BurnerRow]
    lit: Sequence[int]
    burner_of: Sequence[int]
    last_named: Sequence[int]
    boilers: Sequence[int]
    branches: Sequence[BranchRow]
    legs: Sequence[LegRow]
    steps: Sequence[StepRow]
    n_items: int = 0
    n_stages: int = 0
    n_loads: int = 0
    n_engines: int = 0
    n_feeds: int = 0
    n_payloads: int = 0
    n_boilers: int = 0
    n_branches: int = 0
    n_legs: int = 0
    n_rules: int = 0
    n_steps: int = 0


NO_TABLES: Final = Tables([], [], [], [], [], [], [], [], [], [], [], [], [], [])
"""Tables of nothing."""


class Books(Struct, frozen=True):
    """Everything that the tally keeps: by load, engine, part, stage, branch, leg, and the lines of the ledger.

    Masses are in kg, speeds in m/s, times in s. `added` holds the delta-v that is added at the end of leg
    ``count[ADD_AT]``, which is how slack is searched for. `flow_of` tells for which burner the flow of a stage's loads
    still holds (-1: none), so that it is summed anew only when the set of engines that can burn may have changed.
    """

    usable: list[float]
    held: list[float]
    residual: list[float]
    stock: list[float]
    burned: list[float]
    lost: list[float]
    boiled: list[float]
    handed: list[float]
    taken: list[float]
    flow: list[float]
    dry_mark: list[float]
    used: list[float]
    lit_at: list[float]
    engine_flow: list[float]
    engine_speed: list[float]
    feed_flow: list[float]
    part_mass: list[float]
    payload_on: list[int]
    where: list[int]
    order: list[int]
    left_in: list[int]
    flow_of: list[int]
    flow_thrust: list[float]
    flow_mdot: list[float]
    flow_mask: list[int]
    unbalanced: list[int]
    unbalanced_kg: list[float]
    branch_mass: list[float]
    branch_clock: list[float]
    branch_charged: list[float]
    branch_owed: list[float]
    branch_started: list[int]
    reserve: list[float]
    reserve_owed: list[float]
    rule_sum: list[float]
    required: list[float]
    by_fraction: list[float]
    by_floor: list[float]
    by_fixed: list[float]
    owed: list[float]
    cause: list[int]
    handover: list[int]
    unlit: list[int]
    mass_before: list[float]
    mass_after: list[float]
    clock_before: list[float]
    clock_after: list[float]
    line_begin: list[int]
    line_end: list[int]
    spare: list[float]
    spare_speed: list[float]
    spare_mass: list[float]
    spare_stage: list[int]
    spare_mask: list[int]
    spare_more: list[int]
    next_stage: list[int]
    next_mask: list[int]
    next_spare: list[float]
    next_speed: list[float]
    next_mass: list[float]
    lines: list[float]
    count: list[int]
    added: list[float]


BLANK: Final[dict[str, tuple[str, float]]] = {
    "usable": ("loads", 0.0),
    "held": ("loads", 0.0),
    "residual": ("loads", 0.0),
    "stock": ("loads", 0.0),
    "burned": ("loads", 0.0),
    "lost": ("loads", 0.0),
    "boiled": ("loads", 0.0),
    "handed": ("loads", 0.0),
    "taken": ("loads", 0.0),
    "flow": ("loads", 0.0),
    "dry_mark": ("loads", 0.0),
    "used": ("engines", 0.0),
    "lit_at": ("engines", 0.0),
    "engine_flow": ("engines", 0.0),
    "engine_speed": ("engines", 0.0),
    "feed_flow": ("feeds", 0.0),
    "part_mass": ("parts", 0.0),
    "payload_on": ("payloads", NOT_FLOWN),
    "where": ("stages", 0),
    "order": ("stages", 0),
    "left_in": ("stages", -1),
    "flow_of": ("stages", -1),
    "flow_thrust": ("stages", 0.0),
    "flow_mdot": ("stages", 0.0),
    "flow_mask": ("stages", 0),
    "unbalanced": ("stages", 0),
    "unbalanced_kg": ("stages", 0.0),
    "branch_mass": ("branches", 0.0),
    "branch_clock": ("branches", 0.0),
    "branch_charged": ("branches", 0.0),
    "branch_owed": ("branches", 0.0),
    "branch_started": ("branches", 0),
    "reserve": ("branches", 0.0),
    "reserve_owed": ("branches", 0.0),
    "rule_sum": ("rules", 0.0),
    "required": ("legs", 0.0),
    "by_fraction": ("legs", 0.0),
    "by_floor": ("legs", 0.0),
    "by_fixed": ("legs", 0.0),
    "owed": ("legs", 0.0),
    "cause": ("marks", 0),
    "handover": ("legs", 0),
    "unlit": ("legs", 0),
    "mass_before": ("legs", 0.0),
    "mass_after": ("legs", 0.0),
    "clock_before": ("legs", 0.0),
    "clock_after": ("legs", 0.0),
    "line_begin": ("legs", -1),
    "line_end": ("legs", 0),
    "spare": ("marks", 0.0),
    "spare_speed": ("marks", 0.0),
    "spare_mass": ("marks", 0.0),
    "spare_stage": ("marks", -1),
    "spare_mask": ("marks", 0),
    "spare_more": ("marks", 0),
    "next_stage": ("marks", -1),
    "next_mask": ("marks", 0),
    "next_spare": ("marks", 0.0),
    "next_speed": ("marks", 0.0),
    "next_mass": ("marks", 0.0),
    "lines": ("lines", 0.0),
    "count": ("count", 0),
    "added": ("added", 0.0),
}
"""For each list of the books, what it has an entry for, and the entry of blank books."""
