"""The tally: the steps of a plan, one after another, paid out of the stack; the only place where mass changes."""

import math

from burntally_service.kernels.tally_books import load_up, stage_mass
from burntally_service.kernels.tally_burns import NOTHING_OWED, any_can_burn, pay
from burntally_service.kernels.tally_flow import DRY_FRACTION, finish_line, light_flow, spare_of, write_line
from burntally_service.kernels.tally_rows import (
    ADD_AT,
    ADDITION,
    BEGIN,
    BURN,
    COAST,
    CONTINGENCY,
    DOCK,
    DRAW,
    END,
    KILOGRAMS,
    LINE_ABSENT,
    LINE_BOILED,
    LINE_DOCKED,
    LINE_HANDED,
    LINE_RELEASE,
    LINE_TAKEN,
    LINE_TAKEN_PAYLOAD,
    PAID,
    RELEASE_PAYLOAD,
    RELEASE_PROPELLANT,
    RESERVE,
    SEPARATE,
    STAMP,
    START,
    TAKE_PAYLOAD,
    TAKE_PROPELLANT,
    Books,
    Tables,
)
from burntally_service.kernels.tally_stack import cause_of, detach

__all__ = ["tally"]

SECONDS_PER_DAY = 86400.0


def tally(tables: Tables, books: Books) -> None:
    """Draw up the books of a plan.

    Parameters
    ----------
    tables : Tables
        The rows of the design and its plan: masses [kg], speeds [m/s], times [s].
    books : Books
        Blank books; changed.

    Returns
    -------
    None
        The books are drawn up; nothing is raised, and what cannot be paid is owed, [m/s].

    References
    ----------
    .. [1] The project's bookkeeping rules C, P and S; no published source. The rocket equation: Sutton, Biblarz,
       Rocket Propulsion Elements, 9th ed., sec. 4.1.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> empty = Tables(*([],) * 14)
    >>> tally(empty, blank_books(empty, 0))
    """
    load_up(tables, books)
    index = 0
    while index < len(tables.steps):
        step = tables.steps[index]
        index += 1
        op = step.op
        if op == BURN:
            _manoeuvre(tables, books, step.leg, (step.purpose, step.amount, step.count))
        elif op == END:
            _end(tables, books, step.leg)
        elif op == BEGIN:
            _begin(tables, books, step.leg)
        elif op == COAST:
            _coast(tables, books, step.leg, step.amount)
        elif op == START:
            if not books.branch_started[step.part]:
                index = tables.branches[step.part].end_step
        else:
            _exchange(tables, books, op, (step.leg, step.part, step.amount, step.count))


def _begin(tables: Tables, books: Books, leg: int) -> None:
    """Note what a leg starts with; nothing is lit in it yet."""
    branch = tables.legs[leg].branch
    books.count[STAMP] += 1
    books.mass_before[leg] = books.branch_mass[branch]
    books.clock_before[leg] = books.branch_clock[branch]


def _manoeuvre(tables: Tables, books: Books, leg: int, order: tuple[int, float, int]) -> None:
    """Pay one manoeuvre, flown as so many ignitions (P4)."""
    purpose, amount, splits = order
    books.required[leg] += amount
    if amount <= 0.0:
        return
    for _ in range(splits):
        books.count[STAMP] += 1
        _charge(tables, books, leg, (purpose, amount / splits))


def _charge(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Pay a delta-v, and note what is owed and why."""
    owed = pay(tables, books, leg, order[0], order[1])
    if owed > 0.0:
        if books.cause[leg] == PAID:
            books.cause[leg] = cause_of(tables, books, leg)
        books.owed[leg] += owed
        books.branch_owed[tables.legs[leg].branch] += owed


def _end(tables: Tables, books: Books, leg: int) -> None:
    """Settle a leg: contingency (C2), an addition that is searched for, the reserve that follows (C4)."""
    row = tables.legs[leg]
    branch = row.branch
    if row.charged:
        _contingency(tables, books, leg)
    if books.count[ADD_AT] == leg:
        _add(tables, books, leg)
    books.mass_after[leg] = books.branch_mass[branch]
    books.clock_after[leg] = books.branch_clock[branch]
    if row.charged:
        _note_spare(tables, books, leg, leg)
    if row.reserves:
        _hold_reserve(tables, books, leg)


def _add(tables: Tables, books: Books, leg: int) -> None:
    """Burn the delta-v that slack is searched with; it raises no contingency, reserve or ignition of its own (M)."""
    owed = pay(tables, books, leg, ADDITION, books.added[0])
    books.added[1] = owed
    books.branch_owed[tables.legs[leg].branch] += owed


def _contingency(tables: Tables, books: Books, leg: int) -> None:
    """Charge what the rule of a leg adds: max(fraction, floor) + fixed, a category's floor at its last leg (C2)."""
    row = tables.legs[leg]
    base = books.required[leg]
    share = row.fraction * base
    floor = 0.0
    if row.floor_on_category:
        place = row.branch * len(tables.legs) + row.rule
        books.rule_sum[place] += share
        if row.settles:
            floor = max(0.0, row.floor - books.rule_sum[place])
    elif row.rule >= 0:
        floor = max(0.0, row.floor - share)
    books.by_fraction[leg] = share
    books.by_floor[leg] = floor
    books.by_fixed[leg] = row.fixed
    added = share + floor + row.fixed
    books.branch_charged[row.branch] += base + added
    if added > 0.0:
        _charge(tables, books, leg, (CONTINGENCY, added))


def _hold_reserve(tables: Tables, books: Books, leg: int) -> None:
    """Burn the reserve of a branch out of the account of its last charged leg, after which nothing else is charged."""
    branch = tables.legs[leg].branch
    row = tables.branches[branch]
    amount = row.reserve_fraction * books.branch_charged[branch] + row.reserve_delta_v
    mark = len(tables.legs) + branch
    books.reserve[branch] = amount
    if amount > 0.0:
        owed = pay(tables, books, leg, RESERVE, amount)
        if owed > 0.0:
            books.cause[mark] = cause_of(tables, books, leg)
        books.reserve_owed[branch] = owed
        books.branch_owed[branch] += owed
    if books.count[ADD_AT] == mark:
        _add(tables, books, leg)
    if amount > 0.0:
        _note_spare(tables, books, leg, mark)


def _note_spare(tables: Tables, books: Books, leg: int, mark: int) -> None:
    """Note which stage of a leg's account would pay an addition here, and how much it has (rule M)."""
    stages = len(tables.stages)
    branch = tables.legs[leg].branch
    base = tables.legs[leg].account * stages
    below = False
    for position in range(stages):
        stage = books.order[position]
        if books.where[stage] != branch:
            continue
        burner = tables.burner_of[base + stage]
        if burner < 0 or not any_can_burn(tables, books, burner):
            below = True
            continue
        if books.spare_stage[mark] >= 0:
            books.spare_more[mark] = 1
            return
        thrust, mdot, mask = light_flow(tables, books, burner)
        time, first_dry = spare_of(tables, books, stage)
        books.spare[mark] = mdot * time
        books.spare_speed[mark] = thrust / mdot
        books.spare_mass[mark] = books.branch_mass[branch]
        books.spare_stage[mark] = stage
        books.spare_mask[mark] = mask
        if below or _burns_on(tables, books, burner, first_dry):
            books.spare_more[mark] = 1


def _burns_on(tables: Tables, books: Books, burner: int, dry: int) -> bool:
    """Tell whether some engine of a burner goes on when one load is dry."""
    row = tables.burners[burner]
    for place in range(row.first_lit, row.end_lit):
        fitted = tables.engines[tables.lit[place]]
        fed_by_dry = False
        for feed in range(fitted.first_feed, fitted.end_feed):
            fed_by_dry = fed_by_dry or tables.feeds[feed].load == dry
        if not fed_by_dry:
            return True
    return False


def _coast(tables: Tables, books: Books, leg: int, duration: float) -> None:
    """Let time pass, and boil off what boils (P6)."""
    branch = tables.legs[leg].branch
    books.branch_clock[branch] += duration
    for load in tables.boilers:
        row = tables.loads[load]
        if books.where[row.stage] != branch or books.usable[load] <= 0.0:
            continue
        kg = min(books.usable[load], row.boiloff_per_day * (duration / SECONDS_PER_DAY))
        write_line(books, LINE_BOILED, leg, load, (0.0, 0.0, kg, books.branch_mass[branch], books.branch_clock[branch]))
        if kg == books.usable[load]:
            finish_line(books, 1, 0.0)
        books.usable[load] -= kg
        books.boiled[load] += kg
        books.branch_mass[branch] -= kg


def _exchange(tables: Tables, books: Books, op: int, order: tuple[int, int, float, int]) -> None:
    """Do what moves mass without a manoeuvre."""
    leg, part, amount, _ = order
    if op == DRAW:
        _draw(tables, books, leg, amount)
    elif op == SEPARATE:
        _separate(tables, books, leg, part)
    elif op == RELEASE_PAYLOAD:
        _release(tables, books, leg, (part, amount))
    elif op == RELEASE_PROPELLANT:
        _hand_over(tables, books, leg, (part, amount))
    elif op == TAKE_PAYLOAD:
        _take_payload(tables, books, leg, part)
    elif op == TAKE_PROPELLANT:
        _take_propellant(tables, books, leg, (part, amount))
    elif op == DOCK:
        _dock(tables, books, leg, part)


def _draw(tables: Tables, books: Books, leg: int, amount: float) -> None:
    """Draw kilograms with the rule's fraction; what is owed of them counts as a delta-v (C3, P7)."""
    row = tables.legs[leg]
    owed = pay(tables, books, leg, KILOGRAMS, amount * (1.0 + row.fraction))
    mass = books.branch_mass[row.branch]
    if owed > 0.0:
        speed = _speed_of_lowest(tables, row.account)
        delta_v = speed * math.log(mass / max(mass - owed, DRY_FRACTION * mass))
        if delta_v >= NOTHING_OWED:
            books.cause[leg] = cause_of(tables, books, leg)
            books.owed[leg] += delta_v
            books.branch_owed[row.branch] += delta_v
    _note_spare(tables, books, leg, leg)


def _speed_of_lowest(tables: Tables, account: int) -> float:
    """Mixed exhaust speed of an account's engines on its lowest stage, attached or not; 0 without engines."""
    stages = len(tables.stages)
    for stage in range(stages):
        burner = tables.burner_of[account * stages + stage]
        if burner >= 0:
            row = tables.burners[burner]
            thrust = 0.0
            mdot = 0.0
            for place in range(row.first_lit, row.end_lit):
                fitted = tables.engines[tables.lit[place]]
                thrust += fitted.count * fitted.thrust
                mdot += fitted.count * fitted.thrust / (fitted.isp * 9.80665)
            return thrust / mdot
    return 0.0


def _separate(tables: Tables, books: Books, leg: int, stage: int) -> None:
    """Separate a stage with all below it; absent, say so."""
    if books.where[stage] != tables.legs[leg].branch:
        if books.left_in[stage] == leg:
            return
        write_line(books, LINE_ABSENT, leg, stage, (0.0, 0.0, 0.0, 0.0, 0.0))
        return
    for position in range(len(tables.stages)):
        if books.order[position] == stage:
            detach(tables, books, leg, position)
            return


def _release(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Release a payload, or part of it; what is not there is short."""
    payload, wanted = order
    branch = tables.legs[leg].branch
    part = len(tables.stages) + payload
    stage = books.payload_on[payload]
    if stage < 0 or books.where[stage] != branch:
        write_line(books, LINE_ABSENT, leg, part, (0.0, 0.0, 0.0, 0.0, 0.0))
        return
    kg = min(wanted, books.part_mass[part])
    write_line(
        books, LINE_RELEASE, leg, payload, (0.0, wanted, kg, books.branch_mass[branch], books.branch_clock[branch])
    )
    books.part_mass[part] -= kg
    books.branch_mass[branch] -= kg
    if kg == wanted and wanted == math.inf:
        books.payload_on[payload] = -1


def _hand_over(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Hand over usable propellant of a load; what is not there is short."""
    load, wanted = order
    branch = tables.legs[leg].branch
    if books.where[tables.loads[load].stage] != branch:
        write_line(books, LINE_ABSENT, leg, tables.loads[load].stage, (0.0, 0.0, 0.0, 0.0, 0.0))
        return
    kg = min(wanted, books.usable[load])
    write_line(books, LINE_HANDED, leg, load, (0.0, wanted, kg, books.branch_mass[branch], books.branch_clock[branch]))
    books.usable[load] -= kg
    books.handed[load] += kg
    books.branch_mass[branch] -= kg


def _take_payload(tables: Tables, books: Books, leg: int, payload: int) -> None:
    """Take a payload on, onto its stage or onto the topmost one."""
    branch = tables.legs[leg].branch
    stage = tables.payloads[payload].stage
    if stage < 0:
        for position in range(len(tables.stages)):
            if books.where[books.order[position]] == branch:
                stage = books.order[position]
    if stage < 0 or books.where[stage] != branch:
        write_line(books, LINE_ABSENT, leg, max(0, stage), (0.0, 0.0, 0.0, 0.0, 0.0))
        return
    kg = books.part_mass[len(tables.stages) + payload]
    write_line(
        books, LINE_TAKEN_PAYLOAD, leg, payload, (0.0, 0.0, kg, books.branch_mass[branch], books.branch_clock[branch])
    )
    books.payload_on[payload] = stage
    books.branch_mass[branch] += kg


def _take_propellant(tables: Tables, books: Books, leg: int, order: tuple[int, float]) -> None:
    """Take propellant on, a mass or to the load's capacity; its residual share never burns."""
    load, wanted = order
    branch = tables.legs[leg].branch
    row = tables.loads[load]
    if books.where[row.stage] != branch:
        write_line(books, LINE_ABSENT, leg, row.stage, (0.0, 0.0, 0.0, 0.0, 0.0))
        return
    held = books.usable[load] + books.held[load] + books.residual[load]
    kg = max(0.0, row.capacity - held) if wanted == math.inf else wanted
    write_line(books, LINE_TAKEN, leg, load, (0.0, held, kg, books.branch_mass[branch], books.branch_clock[branch]))
    residual = row.residual_fraction * kg
    books.residual[load] += residual
    books.usable[load] += kg - residual
    books.taken[load] += kg
    books.stock[load] += kg
    books.branch_mass[branch] += kg


def _dock(tables: Tables, books: Books, leg: int, docked: int) -> None:
    """Dock what is left of a finished branch on top of the stack."""
    branch = tables.legs[leg].branch
    stages = len(tables.stages)
    if not books.branch_started[docked]:
        return
    moved = 0
    for position in range(stages):
        stage = books.order[position - moved]
        if books.where[stage] == docked:
            for place in range(position - moved, stages - 1):
                books.order[place] = books.order[place + 1]
            books.order[stages - 1] = stage
            moved += 1
            mass = stage_mass(tables, books, stage)
            books.where[stage] = branch
            write_line(
                books,
                LINE_DOCKED,
                leg,
                stage,
                (float(docked), 0.0, mass, books.branch_mass[branch], books.branch_clock[branch]),
            )
            books.branch_mass[branch] += mass
            books.branch_mass[docked] -= mass
