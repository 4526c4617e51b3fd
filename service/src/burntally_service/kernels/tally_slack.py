"""Slack: the most that could be added at the end of a leg, with every charge of its branch still paid (rule M).

The walk goes backward over the ledger with the mass that each stage could lose and still pay what follows. Where that
stage would run dry and drop, and the one above it could go on at no cost, what that one could add comes on top. Any
other handover, and whatever changes what another stage pays in between, has no closed form: such a mark is left to
`tally_search`.
"""

import math
from typing import Final

from burntally_service.kernels.tally_rows import (
    DELTA_V,
    DROPS,
    KG,
    KIND,
    LEG,
    LINE_BOILED,
    LINE_BURN,
    LINE_DOCKED,
    LINE_DRAW,
    LINE_HANDED,
    LINE_IGNITION,
    LINE_SEPARATION,
    LINE_TAKEN,
    LINE_WIDTH,
    LINES,
    MASK,
    MASS,
    NEXT_STAGE,
    NO_MORE,
    PART,
    SPARE,
    Books,
    Tables,
)

__all__ = ["slacks"]

SEARCH: Final = -1.0
"""Mark of a slack that the closed form cannot tell."""

# Rows of the walk: slack by mark, then by stage its state, reach, mask, tail and the account that the tail is of, then
# the draw walked last.
STATE: Final = 1
REACH: Final = 2
MASKS: Final = 3
TAIL: Final = 4
ACCOUNT: Final = 5
LAST: Final = 6

# States of a stage on the walk back: it draws no more; it draws no more while another does; it draws; it draws
# together with others. Only a stage that draws alone has a reach of its own, because what another one draws depends on
# the mass that this one has lost by then.
NOTHING: Final = 0.0
BUSY: Final = 1.0
KNOWN: Final = 2.0
MIXED: Final = 3.0
DOCKED: Final = 4.0
"""Mixed, and no more forgotten where the stage separates, since it comes back."""


def slacks(tables: Tables, books: Books, walk: list[list[float]]) -> None:
    r"""Slack of every charged leg and reserve whose addition one stage pays alone.

    .. math:: s = c \ln \frac{m}{m - a}

    with a the mass that the stage could lose there: what it has to spare after its last draw, times the mass ratios of
    the draws in between. Where another stage would go on after it, and no mass moves in between but by burns, the same
    of that stage is added: its tail.

    Parameters
    ----------
    tables : Tables
        What was tallied.
    books : Books
        Its books, with all lines.
    walk : list of lists of float
        Scratch of seven rows: slack by mark [m/s], then state, reach [kg], mask, tail [m/s] and account by stage, then
        five cells about the draw walked last, the first of them -1; changed.

    Returns
    -------
    None
        The first row holds the slacks, [m/s]; -1 where it must be searched for.

    References
    ----------
    .. [1] The project's bookkeeping rule M; no published source. The rocket equation: Sutton, Biblarz, Rocket
       Propulsion Elements, 9th ed., sec. 4.1.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> empty = NO_TABLES
    >>> slacks(empty, blank_books(empty, 0), [[], [], [], [], [], [], [-1.0] * 5])
    """
    legs = tables.n_legs
    end = books.count[LINES]
    # Legs stand in the order in which they were tallied, and so do their lines.
    for leg in range(legs - 1, -1, -1):
        row = tables.legs[leg]
        if books.line_begin[leg] < 0:
            continue
        after = books.line_end[leg]
        if row.reserves:
            mark = legs + row.branch
            if books.reserve[row.branch] > 0.0:
                walk[0][mark] = _slack_at(tables, books, walk, (mark, leg))
            _walk_lines(tables, books, walk, (end - 1, after, mark))
        if row.charged:
            walk[0][leg] = _slack_at(tables, books, walk, (leg, leg))
        _walk_lines(tables, books, walk, (after - 1, books.line_begin[leg], leg))
        end = books.line_begin[leg]


def _slack_at(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int]) -> float:
    """Slack at the end of a leg, or after a reserve."""
    mark, leg = at
    stage = books.spare_stage[mark]
    if stage < 0:
        return 0.0
    state = walk[STATE][stage]
    reach = books.spare[mark]
    if books.spare_more[mark] == DROPS or _is_mixed(walk, stage, books.spare_mask[mark]):
        return SEARCH
    tail = 0.0
    if state == KNOWN and walk[REACH][stage] <= reach:
        reach = walk[REACH][stage]
        if walk[TAIL][stage] != 0.0:
            tail = _tail_for(tables, walk, stage, leg)
    elif books.spare_more[mark] != NO_MORE:
        tail = _tail_after(tables, books, walk, (mark, leg, state))
    if tail < 0.0:
        return SEARCH
    mass = books.spare_mass[mark]
    return books.spare_speed[mark] * math.log(mass / (mass - reach)) + tail


def _is_mixed(walk: list[list[float]], stage: int, mask: float) -> bool:
    """Tell whether the reach of a stage is not its own, or was learnt with other engines lit than now."""
    return walk[STATE][stage] >= MIXED or (walk[STATE][stage] == KNOWN and walk[MASKS][stage] != mask)


def _tail_for(tables: Tables, walk: list[list[float]], stage: int, leg: int) -> float:
    """Tail of a stage at an earlier leg; -1 if another would go on there, or the stage would stay aboard once dry."""
    tail = walk[TAIL][stage]
    row = tables.legs[leg]
    is_kept = tables.last_named[row.branch * tables.n_stages + stage] > leg
    return SEARCH if tail > 0.0 and (is_kept or walk[ACCOUNT][stage] != row.account) else tail


def _tail_after(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int, float]) -> float:
    """Delta-v that the next stage could add if the payer of a mark ran dry and dropped there; -1 if unclear."""
    mark, leg, state = at
    if books.spare_more[mark] == NO_MORE:
        return 0.0
    if books.spare_more[mark] != NEXT_STAGE or state != NOTHING:
        # What the payer still draws later, out of a tank that is filled by then, would fall to the next stage too.
        return SEARCH
    stage = books.next_stage[mark]
    reach = books.next_spare[mark]
    tail = 0.0
    if _is_mixed(walk, stage, books.next_mask[mark]):
        return SEARCH
    if walk[STATE][stage] == KNOWN and walk[REACH][stage] <= reach:
        reach = walk[REACH][stage]
        tail = _tail_for(tables, walk, stage, leg)
    if tail < 0.0:
        return SEARCH
    mass = books.next_mass[mark]
    return books.next_speed[mark] * math.log(mass / (mass - reach)) + tail


def _walk_lines(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int, int]) -> None:
    """Walk backward over some lines of a leg, or of the reserve after it."""
    last, first, mark = at
    for line in range(last, first - 1, -1):
        start = line * LINE_WIDTH
        kind = books.lines[start + KIND]
        if kind == LINE_BURN:
            if not _goes_on(tables, books.lines, walk, start):
                _walk_draw(tables, books, walk, (start, mark))
        elif kind != LINE_IGNITION or books.lines[start + KG] > 0.0:
            _walk_event(tables, books, walk, start)
            if kind == LINE_DRAW:
                _walk_draw(tables, books, walk, (start, mark))


def _walk_event(tables: Tables, books: Books, walk: list[list[float]], start: int) -> None:
    """Stop trusting, or forget, what is known of stages where mass moves without a burn."""
    kind = int(books.lines[start + KIND])
    part = int(books.lines[start + PART])
    # What is handed over to a later stage depends on the mass at which that happens.
    for stage in range(tables.n_stages):
        if walk[TAIL][stage] > 0.0:
            walk[TAIL][stage] = SEARCH
        if kind == LINE_DOCKED:
            walk[STATE][stage] = DOCKED
    if kind == LINE_SEPARATION:
        if walk[STATE][part] != DOCKED:
            walk[STATE][part] = NOTHING
        walk[TAIL][part] = 0.0
    elif kind == LINE_TAKEN:
        _walk_filling(tables, books, walk, start)
    elif kind == LINE_BOILED:
        if books.lines[start + MASK] > 0.0:
            _mix(walk, tables.loads[part].stage)
    elif kind == LINE_HANDED and books.lines[start + KG] < books.lines[start + DELTA_V]:
        _mix(walk, tables.loads[part].stage)


def _mix(walk: list[list[float]], stage: int) -> None:
    """Mark a stage whose reach is no longer its own."""
    walk[STATE][stage] = max(walk[STATE][stage], MIXED)


def _walk_filling(tables: Tables, books: Books, walk: list[list[float]], start: int) -> None:
    """Forget what later draws need of a stage where its tank is filled up: what was lost before is made up for."""
    row = tables.loads[int(books.lines[start + PART])]
    state = walk[STATE][row.stage]
    if state <= BUSY or state == DOCKED:
        return
    if books.lines[start + MASK] <= 0.0:
        if books.lines[start + DELTA_V] > row.capacity:
            # What is lost before is made up for only as far as it leaves room.
            _mix(walk, row.stage)
        return
    stage = tables.stages[row.stage]
    alone = stage.end_load - stage.first_load == 1
    # Busy, since the later draws fall to another stage if this one runs dry and drops before it is filled. A residual
    # share of what makes up for a loss never burns.
    walk[STATE][row.stage] = BUSY if alone and row.residual_fraction <= 0.0 else MIXED
    walk[TAIL][row.stage] = 0.0


def _walk_draw(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int]) -> None:
    """Carry the mass that a stage could lose from after a draw to before it."""
    start, mark = at
    lines = books.lines
    drawer = tables.burners[int(lines[start + PART])].stage
    mask = lines[start + MASK]
    spare = lines[start + SPARE]
    leg = int(lines[start + LEG])
    if _is_mixed(walk, drawer, mask):
        # Other engines draw on the loads in other shares, so kilograms of one set are none of the other.
        _mix(walk, drawer)
    state = walk[STATE][drawer]
    if state <= BUSY or (state == KNOWN and spare < walk[REACH][drawer]):
        walk[STATE][drawer] = KNOWN
        walk[REACH][drawer] = spare
        walk[MASKS][drawer] = mask
        walk[TAIL][drawer] = _tail_of(tables, books, walk, (start, mark, drawer, state))
        walk[ACCOUNT][drawer] = float(tables.legs[leg].account)
    walk[TAIL][drawer] = _tail_for(tables, walk, drawer, leg)
    is_burn = int(lines[start + KIND]) == LINE_BURN
    if not is_burn and walk[TAIL][drawer] > 0.0:
        # Kilograms that fall to the next stage are worth another delta-v there.
        walk[TAIL][drawer] = SEARCH
    if drawer != int(walk[LAST][0]):
        _mix_others(tables, walk, drawer)
    mass = lines[start + MASS]
    if is_burn:
        walk[REACH][drawer] *= mass / (mass - lines[start + KG])
    last = walk[LAST]
    last[0] = float(drawer)
    last[1] = lines[start + LEG]
    last[2] = mass
    last[3] = walk[REACH][drawer] if walk[STATE][drawer] == KNOWN else SEARCH
    last[4] = walk[TAIL][drawer]


def _goes_on(tables: Tables, lines: list[float], walk: list[list[float]], start: int) -> bool:
    """Carry on from a burn to the same stage's burn before it, where that changes nothing but how much it could lose.

    Most burns are such, and the rest of the walk need not look at them.
    """
    last = walk[LAST]
    drawer = tables.burners[int(lines[start + PART])].stage
    reach = walk[REACH][drawer]
    if last[0] != drawer or walk[STATE][drawer] != KNOWN:
        return False
    if lines[start + MASK] != walk[MASKS][drawer] or lines[start + SPARE] < reach:
        return False
    mass = lines[start + MASS]
    reach *= mass / (mass - lines[start + KG])
    walk[REACH][drawer] = reach
    leg = lines[start + LEG]
    if walk[TAIL][drawer] > 0.0:
        walk[TAIL][drawer] = _tail_for(tables, walk, drawer, int(leg))
    last[1] = leg
    last[2] = mass
    last[3] = reach
    last[4] = walk[TAIL][drawer]
    return True


def _mix_others(tables: Tables, walk: list[list[float]], drawer: int) -> None:
    """Mark the other stages: what another one draws in between depends on the mass that they have lost."""
    for stage in range(tables.n_stages):
        if stage != drawer:
            if walk[STATE][stage] == KNOWN:
                walk[STATE][stage] = MIXED
            elif walk[STATE][stage] == NOTHING:
                walk[STATE][stage] = BUSY


def _tail_of(tables: Tables, books: Books, walk: list[list[float]], at: tuple[int, int, int, float]) -> float:
    """Delta-v that later stages could add if a stage ran dry in a draw; -1 if that is not clear."""
    start, mark, drawer, state = at
    if _has_gone_on(books, walk[LAST], start, drawer):
        return _tail_walked(tables, books, walk[LAST], (mark, drawer))
    if books.spare_stage[mark] < 0:
        return 0.0
    if books.spare_stage[mark] != drawer or books.spare_mask[mark] != int(books.lines[start + MASK]):
        return SEARCH
    leg = int(books.lines[start + LEG])
    tail = _tail_after(tables, books, walk, (mark, leg, state))
    if tail > 0.0 and not _is_plain(tables, books, books.next_stage[mark], drawer):
        return SEARCH
    return tail


def _has_gone_on(books: Books, last: list[float], start: int, drawer: int) -> bool:
    """Tell whether a draw ran its stage dry and another stage went on in the same leg."""
    following = int(last[0])
    in_leg = last[1] == books.lines[start + LEG]
    return books.lines[start + SPARE] == 0.0 and following not in (-1, drawer) and in_leg


def _tail_walked(tables: Tables, books: Books, last: list[float], at: tuple[int, int]) -> float:
    """Delta-v that the stage walked last could add, which did go on for the drawer; -1 if that is not clear."""
    mark, drawer = at
    following = int(last[0])
    known = last[3] >= 0.0 and last[4] >= 0.0 and books.spare_stage[mark] == following
    if not known or not _is_plain(tables, books, following, drawer):
        return SEARCH
    return books.spare_speed[mark] * math.log(last[2] / (last[2] - last[3])) + last[4]


def _is_plain(tables: Tables, books: Books, stage: int, before: int) -> bool:
    """Tell whether a stage may be lit wherever the one before it was, at no cost and within its ignitions."""
    more = 0.0
    for engine in range(tables.stages[before].first_engine, tables.stages[before].end_engine):
        more = max(more, books.used[engine])
    row = tables.stages[stage]
    for engine in range(row.first_engine, row.end_engine):
        fitted = tables.engines[engine]
        if fitted.loss_per_ignition > 0.0 or books.used[engine] + more > fitted.max_ignitions:
            return False
    return True
