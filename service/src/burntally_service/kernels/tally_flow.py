"""What can burn on a stage, how fast its loads go, and the lines in which the ledger tells it."""

import math

from burntally_service.kernels.tally_rows import (
    DELTA_V,
    KG,
    KIND,
    LEG,
    LINE_WIDTH,
    LINES,
    MASK,
    MASS,
    PART,
    PURPOSE,
    ROOM,
    SPARE,
    STAMP,
    TIME,
    Books,
    Tables,
)

__all__ = ["can_burn", "light_flow", "lit_mask", "spare_of", "wants_ignition", "write_line"]


def write_line(
    books: Books, head: tuple[int, int, int], entry: tuple[int, float, float, float, float, int, float]
) -> None:
    """Write one line of the ledger, if there is room; the count grows in any case, and so tells how much was lacking.

    Parameters
    ----------
    books : Books
        Changed: `lines`, `count`.
    head : tuple of int
        Kind of line, leg, part, [-].
    entry : tuple of int and float
        Purpose [-], delta-v [m/s], mass that moves [kg], mass before [kg], time [s], mask of the engines lit [-], mass
        that they could still burn together [kg].

    Returns
    -------
    None
        The line is written, masses in [kg].

    References
    ----------
    .. [1] The project's bookkeeping rules; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import NO_TABLES
    >>> books = blank_books(NO_TABLES, 1)
    >>> write_line(books, (0, 0, 0), (0, 1.0, 2.0, 3.0, 4.0, 0, 0.0))
    >>> books.lines[4:8]
    [1.0, 2.0, 3.0, 4.0]
    """
    count = books.count
    line = count[LINES]
    count[LINES] = line + 1
    if line < count[ROOM]:
        start = line * LINE_WIDTH
        lines = books.lines
        lines[start + KIND] = head[0]
        lines[start + LEG] = head[1]
        lines[start + PART] = head[2]
        lines[start + PURPOSE] = entry[0]
        lines[start + DELTA_V] = entry[1]
        lines[start + KG] = entry[2]
        lines[start + MASS] = entry[3]
        lines[start + TIME] = entry[4]
        lines[start + MASK] = entry[5]
        lines[start + SPARE] = entry[6]


def can_burn(tables: Tables, books: Books, engine: int) -> bool:
    """Tell whether an engine is lit or has an ignition left, and has propellant in every load that feeds it.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        The books as they stand.
    engine : int
        Index of the engine, [-].

    Returns
    -------
    bool
        Whether it can burn, [-].

    References
    ----------
    .. [1] The project's bookkeeping rule P1; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import EngineRow
    >>> engine = EngineRow(1, 400.0, 300.0, 0.0, 0.0, 0, 0, 0)
    >>> tables = Tables([], [], [], [engine], *([],) * 10, n_engines=1)
    >>> books = blank_books(tables, 0)
    >>> books.lit_at[0] = -1.0
    >>> can_burn(tables, books, 0)
    False
    """
    row = tables.engines[engine]
    if books.used[engine] >= row.max_ignitions and books.lit_at[engine] != books.count[STAMP]:
        return False
    for feed in range(row.first_feed, row.end_feed):
        load = tables.feeds[feed].load
        if books.usable[load] <= books.dry_mark[load]:
            return False
    return True


def lit_mask(tables: Tables, books: Books, burner: int) -> int:
    """Which engines of a burner can burn together.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: what `light_flow` keeps, where it has to be asked.
    burner : int
        Index of the burner, [-].

    Returns
    -------
    int
        Bit n set: the stage's engine n can burn, [-].

    References
    ----------
    .. [1] The project's bookkeeping rule P1; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import BurnerRow, StageRow
    >>> tables = Tables([], [StageRow(0, 0, 0, 0, 0)], *([],) * 4, [BurnerRow(0, 0, 0)], *([],) * 7, n_stages=1)
    >>> lit_mask(tables, blank_books(tables, 0), 0)
    0
    """
    row = tables.burners[burner]
    load = row.lone
    if load < 0:
        _, _, mask = light_flow(tables, books, burner)
        return mask
    engine = tables.lit[row.first_lit]
    if books.usable[load] <= books.dry_mark[load]:
        return 0
    is_out = books.used[engine] >= tables.engines[engine].max_ignitions
    return 0 if is_out and books.lit_at[engine] != books.count[STAMP] else row.mask


def light_flow(tables: Tables, books: Books, burner: int) -> tuple[float, float, int]:
    """Thrust and mass flow of the engines of a burner that can burn together, and which they are.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        Changed: `flow` of the stage's loads, [kg/s], and what is kept of it.
    burner : int
        Index of the burner, [-].

    Returns
    -------
    thrust : float
        Sum of the thrusts in vacuum, [N]; 0 if none can burn.
    mdot : float
        Sum of the mass flows, [kg/s].
    mask : int
        Bit n set: the stage's engine n burns, [-].

    References
    ----------
    .. [1] Sutton, Biblarz, Rocket Propulsion Elements, 9th ed., sec. 2.5 (total thrust over total flow).

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import BurnerRow, StageRow
    >>> tables = Tables([], [StageRow(0, 0, 0, 0, 0)], *([],) * 4, [BurnerRow(0, 0, 0)], *([],) * 7, n_stages=1)
    >>> light_flow(tables, blank_books(tables, 0), 0)
    (0.0, 0.0, 0)
    """
    row = tables.burners[burner]
    place = row.stage
    # The engines that can burn change far less often than a stage burns, so their sum is kept until they do.
    if books.flow_of[place] == burner:
        return books.flow_thrust[place], books.flow_mdot[place], books.flow_mask[place]
    stage = tables.stages[place]
    flow = books.flow
    for load in range(stage.first_load, stage.end_load):
        flow[load] = 0.0
    thrust = 0.0
    mdot = 0.0
    mask = 0
    lasting = True
    for index in range(row.first_lit, row.end_lit):
        engine = tables.lit[index]
        fitted = tables.engines[engine]
        lasting = lasting and books.used[engine] < fitted.max_ignitions
        if can_burn(tables, books, engine):
            thrust += fitted.count * fitted.thrust
            mdot += books.engine_flow[engine]
            mask |= 1 << (engine - stage.first_engine)
            for feed in range(fitted.first_feed, fitted.end_feed):
                flow[tables.feeds[feed].load] += books.feed_flow[feed]
    # An engine without an ignition left burns only while it is lit, so its flow holds for this moment alone.
    books.flow_of[place] = burner if lasting else -1
    books.flow_thrust[place] = thrust
    books.flow_mdot[place] = mdot
    books.flow_mask[place] = mask
    return thrust, mdot, mask


def spare_of(tables: Tables, books: Books, stage: int) -> tuple[float, int]:
    """Burning time until the first load runs dry at the flow of `light_flow`, and which load that is.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        The books, `flow` set for the stage.
    stage : int
        Index of the stage, [-].

    Returns
    -------
    time : float
        Time, [s]; infinite if nothing flows.
    load : int
        The load that runs dry first, [-]; -1 if nothing flows.

    References
    ----------
    .. [1] The project's bookkeeping rules; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import StageRow
    >>> tables = Tables([], [StageRow(0, 0, 0, 0, 0)], *([],) * 12, n_stages=1)
    >>> spare_of(tables, blank_books(tables, 0), 0)
    (inf, -1)
    """
    row = tables.stages[stage]
    shortest = math.inf
    first_dry = -1
    for load in range(row.first_load, row.end_load):
        if books.flow[load] > 0.0:
            time = books.usable[load] / books.flow[load]
            if time < shortest:
                shortest = time
                first_dry = load
    return shortest, first_dry


def wants_ignition(tables: Tables, books: Books, burner: int) -> bool:
    """Tell whether an engine of a burner has propellant in all its feeds, and only lacks an ignition.

    Parameters
    ----------
    tables : Tables
        What is tallied.
    books : Books
        The books as they stand.
    burner : int
        Index of the burner, [-].

    Returns
    -------
    bool
        Whether an ignition is all that it lacks, [-].

    References
    ----------
    .. [1] The project's finding `ignitions-exceeded`; no published source.

    Examples
    --------
    >>> from burntally_service.kernels.tally_books import blank_books
    >>> from burntally_service.kernels.tally_rows import BurnerRow, EngineRow
    >>> engine = EngineRow(1, 400.0, 300.0, 0.0, 0.0, 0, 0, 0)
    >>> tables = Tables([], [], [], [engine], [], [], [BurnerRow(0, 0, 1)], [0], *([],) * 6, n_engines=1)
    >>> wants_ignition(tables, blank_books(tables, 0), 0)
    True
    """
    row = tables.burners[burner]
    for place in range(row.first_lit, row.end_lit):
        engine = tables.lit[place]
        if books.used[engine] < tables.engines[engine].max_ignitions:
            continue
        fed = True
        fitted = tables.engines[engine]
        for feed in range(fitted.first_feed, fitted.end_feed):
            load = tables.feeds[feed].load
            fed = fed and books.usable[load] > books.dry_mark[load]
        if fed:
            return True
    return False
