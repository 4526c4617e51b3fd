"""Delta-v and propellant budgets of multi-stage vehicles: the contract, the client and the commands."""

from importlib import import_module
from typing import TYPE_CHECKING, Final

from burntally.version import __version__

if TYPE_CHECKING:
    from burntally.client import Answer, AsyncClient, Client, connect, connect_async, errors
    from burntally.model.budget import BranchBook, Budget, Finding, LegBook, Remedy, StageBook
    from burntally.model.design import Design
    from burntally.model.mission import (
        Allowance,
        Ascend,
        Atmosphere,
        Body,
        BodyOrbit,
        Branch,
        ChargedLeg,
        Coast,
        Deorbit,
        Flyby,
        Hyperbola,
        Land,
        Landing,
        Leg,
        Location,
        Mission,
        Orbit,
        OrbitLocation,
        PropellantMove,
        Release,
        Rendezvous,
        Separate,
        Site,
        Spiral,
        System,
        TakeOn,
        Transfer,
        Transit,
    )
    from burntally.model.operations import (
        Bodies,
        BodyRecord,
        Performance,
        PerformanceRequest,
        PresetRecord,
        Presets,
        TransferAnswer,
        TransferRequest,
    )
    from burntally.model.rules import Contingency, GrowthRow, Limits, Reserve, Rules
    from burntally.model.vehicle import Engine, Load, MassItem, Payload, Stage, Vehicle

__all__ = [
    "Allowance",
    "Answer",
    "Ascend",
    "AsyncClient",
    "Atmosphere",
    "Bodies",
    "Body",
    "BodyOrbit",
    "BodyRecord",
    "Branch",
    "BranchBook",
    "Budget",
    "ChargedLeg",
    "Client",
    "Coast",
    "Contingency",
    "Deorbit",
    "Design",
    "Engine",
    "Finding",
    "Flyby",
    "GrowthRow",
    "Hyperbola",
    "Land",
    "Landing",
    "Leg",
    "LegBook",
    "Limits",
    "Load",
    "Location",
    "MassItem",
    "Mission",
    "Orbit",
    "OrbitLocation",
    "Payload",
    "Performance",
    "PerformanceRequest",
    "PresetRecord",
    "Presets",
    "PropellantMove",
    "Release",
    "Remedy",
    "Rendezvous",
    "Reserve",
    "Rules",
    "Separate",
    "Site",
    "Spiral",
    "Stage",
    "StageBook",
    "System",
    "TakeOn",
    "Transfer",
    "TransferAnswer",
    "TransferRequest",
    "Transit",
    "Vehicle",
    "__version__",
    "connect",
    "connect_async",
    "errors",
]

_HOMES: Final = (
    "burntally.client",
    "burntally.model.budget",
    "burntally.model.design",
    "burntally.model.mission",
    "burntally.model.operations",
    "burntally.model.rules",
    "burntally.model.vehicle",
)

if not TYPE_CHECKING:  # with it, a checker would take any name

    def __getattr__(name: str) -> object:
        """Load a public name on first use.

        Building the contract's types takes a tenth of a second, which `burntally --version` need not wait for.
        """
        if name in __all__:
            home = next(home for home in map(import_module, _HOMES) if name in home.__all__)
            return getattr(home, name)
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
