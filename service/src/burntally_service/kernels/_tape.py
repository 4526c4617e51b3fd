"""A tape: the arithmetic of one run of kernels, recorded once and replayed for many lanes of numbers.

Kernels run on `Number` in place of floats. Each number does its arithmetic and writes it down; each comparison that a
kernel makes is written down as a guard, with what it told. A lane for which every guard tells the same goes through
the same arithmetic in the same order, so its results are the kernels' own to the last bit. The kernels stay the only
place where their rules are written.
"""

import math
import sys
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from types import FunctionType, SimpleNamespace
from typing import Any, Final

from burntally_service.kernels._compile import rebound

__all__ = ["Number", "Tape", "record", "recording"]

LOAD: Final = 0
STORE: Final = 1
ADD: Final = 2
SUBTRACT: Final = 3
MULTIPLY: Final = 4
DIVIDE: Final = 5
NEGATE: Final = 6
EXPM1: Final = 7
LOG: Final = 8
IS_LESS: Final = 9
IS_NOT_MORE: Final = 10
IS_EQUAL: Final = 11

_INPUT: Final = -1
_CONSTANT: Final = -2
_FIRST_GUARD: Final = IS_LESS

_OUT_OF_DOMAIN: Final = "math domain error"
_MOST_EXPONENT: Final = math.log(sys.float_info.max)

_recordings: dict[FunctionType, Callable[..., Any]] = {}


@dataclass(frozen=True, slots=True, kw_only=True)
class Tape:
    """The recorded program.

    Each line of it is an operation, the slot that it fills (of a guard: what it must tell, 1 or 0; of a store: the
    outcome), and the slots that it reads (of a load: the column). The first slots hold the constants.
    """

    program: list[tuple[int, int, int, int]]
    constants: list[float]
    n_slots: int
    n_outcomes: int


@dataclass(slots=True)
class _Recorder:
    """The tape in the making: entries by number, each an operation and what it takes."""

    entries: list[tuple[int, int, int, int]] = field(default_factory=list)
    numbers: dict[tuple[int, int, int], "Number"] = field(default_factory=dict)
    constants: dict[tuple[float, float], int] = field(default_factory=dict)
    guards: set[tuple[int, int, int]] = field(default_factory=set)

    def entry(self, op: int, first: int, second: int = 0, told: int = 0) -> int:
        """Write an entry down; return its number."""
        self.entries.append((op, first, second, told))
        return len(self.entries) - 1

    def place_of(self, operand: object) -> int:
        """Entry of an operand: a number's own, or that of a constant."""
        if isinstance(operand, Number):
            return operand.place
        value = float(operand)  # type: ignore[arg-type] # int and float; anything else raises, as it should
        # The sign keeps the two zeros apart.
        key = (value, math.copysign(1.0, value))
        if key not in self.constants:
            self.constants[key] = self.entry(_CONSTANT, len(self.constants))
        return self.constants[key]

    def result(self, op: int, operands: tuple[object, object], value: float) -> "Number":
        """Write an operation down, unless it stands there already."""
        key = (op, self.place_of(operands[0]), self.place_of(operands[1]))
        if key not in self.numbers:
            self.numbers[key] = Number(self, self.entry(*key), value)
        return self.numbers[key]

    def guard(self, op: int, operands: tuple[object, object], *, told: bool) -> bool:
        """Write a comparison down with what it told, unless it stands there already."""
        key = (op, self.place_of(operands[0]), self.place_of(operands[1]))
        if key not in self.guards:
            self.guards.add(key)
            self.entry(*key, int(told))
        return told


class Number:
    """A float that writes down what is done with it.

    What it cannot write down raises, so that nothing is ever left out of a tape: it does not turn into a float, and
    the functions of `math` refuse it where `recording` has not replaced them.
    """

    __slots__ = ("place", "recorder", "value")
    __hash__ = None  # type: ignore[assignment] # equal numbers may differ in other lanes

    def __init__(self, recorder: _Recorder, place: int, value: float) -> None:
        self.recorder = recorder
        self.place = place
        self.value = value

    def __add__(self, other: object) -> "Number":
        return self.recorder.result(ADD, (self, other), self.value + _value(other))

    def __radd__(self, other: object) -> "Number":
        return self.recorder.result(ADD, (other, self), _value(other) + self.value)

    def __sub__(self, other: object) -> "Number":
        return self.recorder.result(SUBTRACT, (self, other), self.value - _value(other))

    def __rsub__(self, other: object) -> "Number":
        return self.recorder.result(SUBTRACT, (other, self), _value(other) - self.value)

    def __mul__(self, other: object) -> "Number":
        return self.recorder.result(MULTIPLY, (self, other), self.value * _value(other))

    def __rmul__(self, other: object) -> "Number":
        return self.recorder.result(MULTIPLY, (other, self), _value(other) * self.value)

    def __truediv__(self, other: object) -> "Number":
        _must_differ(other, 0.0)
        return self.recorder.result(DIVIDE, (self, other), self.value / _value(other))

    def __rtruediv__(self, other: object) -> "Number":
        _must_differ(self, 0.0)
        return self.recorder.result(DIVIDE, (other, self), _value(other) / self.value)

    def __neg__(self) -> "Number":
        return self.recorder.result(NEGATE, (self, self), -self.value)

    def __lt__(self, other: object) -> bool:
        return self.recorder.guard(IS_LESS, (self, other), told=self.value < _value(other))

    def __le__(self, other: object) -> bool:
        return self.recorder.guard(IS_NOT_MORE, (self, other), told=self.value <= _value(other))

    def __gt__(self, other: object) -> bool:
        return self.recorder.guard(IS_LESS, (other, self), told=self.value > _value(other))

    def __ge__(self, other: object) -> bool:
        return self.recorder.guard(IS_NOT_MORE, (other, self), told=self.value >= _value(other))

    def __eq__(self, other: object) -> bool:
        return self.recorder.guard(IS_EQUAL, (self, other), told=self.value == _value(other))

    def __ne__(self, other: object) -> bool:
        return not self == other

    def __bool__(self) -> bool:
        return self != 0.0


def _value(operand: object) -> float:
    return operand.value if isinstance(operand, Number) else float(operand)  # type: ignore[arg-type] # as above


def _must_differ(operand: object, value: float) -> None:
    """Raise where Python would, and let a tape hold for no lane where it would."""
    if operand == value:
        raise ZeroDivisionError


def _log(operand: object) -> object:
    if isinstance(operand, Number):
        if operand <= 0.0:
            raise ValueError(_OUT_OF_DOMAIN)
        return operand.recorder.result(LOG, (operand, operand), math.log(operand.value))
    return math.log(_value(operand))


def _expm1(operand: object) -> object:
    if isinstance(operand, Number):
        if operand > _MOST_EXPONENT:
            raise OverflowError
        return operand.recorder.result(EXPM1, (operand, operand), math.expm1(operand.value))
    return math.expm1(_value(operand))


_MATH: Final = SimpleNamespace(log=_log, expm1=_expm1, inf=math.inf)


def recording(kernel: Callable[..., Any]) -> Callable[..., Any]:
    """Copy a kernel, and the kernels that it calls, with functions of `math` that write themselves down.

    Parameters
    ----------
    kernel : function
        Plain function of the kernels package.

    Returns
    -------
    callable
        The copy, which takes a `Number` wherever the kernel takes a float.

    Raises
    ------
    TypeError
        If `kernel` is not a plain function.
    """
    if not isinstance(kernel, FunctionType):
        message = f"{kernel!r} is not a plain function"
        raise TypeError(message)
    if kernel not in _recordings:
        _recordings[kernel] = rebound(kernel, recording, {"math": _MATH})
    return _recordings[kernel]


def record(run: Callable[[list[Number]], Sequence[object]], values: Sequence[float]) -> Tape:
    """Run something on numbers and keep what it did.

    Parameters
    ----------
    run : callable
        Takes a number for each value; returns the outcomes, numbers or floats. It calls only `recording` kernels.
    values : sequence of float
        The lane for which it is recorded, which decides what the comparisons tell.

    Returns
    -------
    Tape
        The program: for this lane, and every one for which the guards tell the same, it yields the same outcomes.
    """
    recorder = _Recorder()
    inputs = [Number(recorder, recorder.entry(_INPUT, place), value) for place, value in enumerate(values)]
    told = [recorder.place_of(outcome) for outcome in run(inputs)]
    return _finished(recorder, told)


def _finished(recorder: _Recorder, told: Sequence[int]) -> Tape:
    """Drop what no outcome or guard rests on, and give each entry a slot for as long as it is read."""
    last_read = _last_reads(recorder.entries, told)
    writer = _Writer(len(recorder.constants))
    for place, (op, first, second, guarded) in enumerate(recorder.entries):
        if op < 0 or (op < _FIRST_GUARD and place not in last_read):
            continue
        slots = (writer.slot_of(recorder.entries, first), writer.slot_of(recorder.entries, second))
        # Freed before the result has its slot, which may be one of theirs: an operation goes lane by lane.
        writer.free(last_read, place, (first, second))
        to = guarded if op >= _FIRST_GUARD else writer.slot_for(place)
        writer.program.append((op, to, *slots))
    for outcome, place in enumerate(told):
        writer.program.append((STORE, outcome, writer.slot_of(recorder.entries, place), 0))
    constants = [value for value, _ in recorder.constants]
    return Tape(program=writer.program, constants=constants, n_slots=writer.n_slots, n_outcomes=len(told))


def _last_reads(entries: Sequence[tuple[int, int, int, int]], told: Sequence[int]) -> dict[int, int]:
    """Where each entry that something rests on is read last."""
    last_read = dict.fromkeys(told, len(entries))
    for place in range(len(entries) - 1, -1, -1):
        op, first, second, _ = entries[place]
        if op >= _FIRST_GUARD or (op >= 0 and place in last_read):
            for operand in (first, second):
                last_read.setdefault(operand, place)
    return last_read


class _Writer:
    """Writes the program, and knows which slots are free."""

    def __init__(self, n_constants: int) -> None:
        self.program: list[tuple[int, int, int, int]] = []
        self.n_slots = n_constants
        self.idle: list[int] = []
        self.slots: dict[int, int] = {}

    def slot_for(self, place: int) -> int:
        """Give an entry a slot."""
        if not self.idle:
            self.idle.append(self.n_slots)
            self.n_slots += 1
        self.slots[place] = self.idle.pop()
        return self.slots[place]

    def slot_of(self, entries: Sequence[tuple[int, int, int, int]], place: int) -> int:
        """Slot of an entry that is read; an input is loaded where it is read first."""
        op, first, _, _ = entries[place]
        if op == _CONSTANT:
            return first
        if op == _INPUT and place not in self.slots:
            self.program.append((LOAD, self.slot_for(place), first, 0))
        return self.slots[place]

    def free(self, last_read: dict[int, int], place: int, operands: tuple[int, ...]) -> None:
        """Free the slots of what is read here for the last time."""
        for operand in dict.fromkeys(operands):
            if last_read[operand] == place and operand in self.slots:
                self.idle.append(self.slots.pop(operand))
