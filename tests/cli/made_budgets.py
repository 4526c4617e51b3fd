"""Budgets made by hand, so that what is printed is held against figures that no code of ours computed.

The tug company and its vehicles are invented. The figures are not consistent physics: they are chosen to fill columns.
"""

from burntally.model.budget import (
    BranchBook,
    Budget,
    Burn,
    Caution,
    ContingencyBook,
    DeltaVBook,
    DryMass,
    Finding,
    LegBook,
    Limiting,
    LoadBook,
    Losses,
    Payer,
    Provenance,
    Remedy,
    ReserveBook,
    RuleUsed,
    StageBook,
    TableUsed,
)

__all__ = ["branch_missing", "closing", "cubesat", "nothing_to_pay", "owing", "two_branches"]


def leg(kind: str, **fields: object) -> LegBook:
    """Make a ledger line; what is not given is a leg that asks and changes nothing."""
    plain: dict[str, object] = {
        "pointer": "/mission/legs/0",
        "source": "none",
        "paid": True,
        "owed": 0.0,
        "elapsed": 0.0,
        "duration": 0.0,
        "required": 0.0,
        "losses": Losses(),
        "contingency": contingency(0.0),
        "charged": 0.0,
        "payers": [],
        "mass_before": 0.0,
        "mass_after": 0.0,
        "manoeuvres": [],
        "alternatives": [],
        "burns": [],
        "events": [],
    }
    return LegBook(kind=kind, **(plain | fields))  # type: ignore[arg-type] # the test's own fields


def contingency(fraction: float, *, floor: float = 0.0, fixed: float = 0.0) -> ContingencyBook:
    return ContingencyBook(fraction=fraction, floor=floor, fixed=fixed)


def payer(stage: str, delta_v: float, propellant: float) -> Payer:
    return Payer(stage=stage, engines=["engine"], delta_v=delta_v, propellant=propellant)


def burn(stage: str, *, time: float, thrust_to_weight: float | None) -> Burn:
    return Burn(
        stage=stage,
        engines=["engine"],
        purpose="manoeuvre",
        delta_v=1.0,
        propellant=1.0,
        burn_time=1.0,
        time=time,
        mass_before=2.0,
        mass_after=1.0,
        thrust=1.0,
        thrust_to_weight_ignition=thrust_to_weight,
        acceleration_burnout=1.0,
    )


def load(loaded: float, burned: float, left: float) -> LoadBook:
    return LoadBook(
        name="propellant",
        loaded=loaded,
        taken_on=0.0,
        burned=burned,
        ignition_loss=0.0,
        boiled_off=0.0,
        handed_over=0.0,
        residual=loaded - burned - left,
        held_back=0.0,
        left=left,
    )


def stage(
    name: str, dry: float, loads: list[LoadBook], capability: float, spent: float, left: float, count: int = 1
) -> StageBook:
    return StageBook(
        name=name,
        count=count,
        dry_mass=DryMass(basic=dry, predicted=dry, allowable=dry),
        delta_v=DeltaVBook(capability=capability, spent=spent, left=left),
        ignitions={"engine": 1},
        loads=loads,
    )


def provenance(preset: str | None = None) -> Provenance:
    return Provenance(
        format=1,
        version="0.1.0",
        design_digest="0123456789abcdef" * 4,
        preset=preset,
        preset_digest=None if preset is None else "fedcba9876543210" * 4,
        tables=[TableUsed(name="bodies", digest="00112233445566778899" * 3)],
    )


def budget(**fields: object) -> Budget:
    plain: dict[str, object] = {
        "closes": True,
        "initial_mass": 1000.0,
        "payload_fraction": 0.1,
        "deliveries": [],
        "findings": [],
        "cautions": [],
        "provenance": provenance(),
    }
    return Budget(**(plain | fields))  # type: ignore[arg-type] # the test's own fields


def closing() -> Budget:
    """A launcher that closes: two stages share the ascent, one trims, and a coast costs nothing."""
    legs = [
        leg(
            "ascend",
            source="stated",
            slack=94.2,
            required=9110.0,
            contingency=contingency(182.2),
            charged=9292.2,
            payers=[payer("first", 3871.0, 280000.0), payer("upper", 5421.2, 60000.0)],
            burns=[
                burn("first", time=0.0, thrust_to_weight=1.31),
                burn("upper", time=160.0, thrust_to_weight=0.9),
            ],
        ),
        leg("coast", duration=2700.0),
        leg(
            "transfer",
            name="trim",
            category="deterministic",
            rule=RuleUsed(category="deterministic"),
            source="computed",
            slack=94.2,
            required=62.1,
            losses=Losses(finite_burn=0.4),
            contingency=contingency(3.1),
            charged=65.6,
            payers=[payer("upper", 65.6, 300.0)],
            burns=[burn("upper", time=3000.0, thrust_to_weight=4.0)],
        ),
    ]
    main = BranchBook(
        name="main",
        closes=True,
        margin=94.2,
        owed=0.0,
        charged=9357.8,
        reserve=ReserveBook(charged=100.0, owed=0.0, slack=94.2),
        legs=legs,
        end_mass=9000.0,
    )
    return budget(
        margin=94.2,
        limiting=Limiting(branch="main", leg=0),
        branches=[main],
        stages=[
            stage("first", 21000.0, [load(285000.0, 280000.0, 0.0)], 3871.0, 3871.0, 0.0),
            stage("upper", 4200.5, [load(61500.0, 60560.25, 310.0)], 5680.0, 5586.8, 94.2),
        ],
        findings=[
            Finding(
                code="no-growth",
                severity="note",
                message="the dry mass of first is covered by no growth rule",
                pointer="/vehicle/stages/0/dry_mass",
                remedies=[],
            ),
            Finding(
                code="asymptote-plane",
                severity="warning",
                message="41 m/s of plane change",
                pointer="/mission/legs/2/to",
                remedies=[],
            ),
        ],
        cautions=[Caution(code="two-body", message="burns are computed about one body")],
        provenance=provenance("house-policy"),
    )


def owing() -> Budget:
    """A tug that owes: its capture is paid in part, and a larger load would mend it."""
    legs = [
        leg(
            "transfer",
            name="raise",
            source="computed",
            required=1500.0,
            charged=1500.0,
            payers=[payer("tug", 1500.0, 800.0)],
        ),
        leg(
            "allowance",
            name="settling",
            source="stated",
            payers=[payer("tug", 0.0, 12.0)],
        ),
        leg(
            "transfer",
            name="capture",
            source="computed",
            paid=False,
            owed=131.96,
            required=500.0,
            contingency=contingency(10.0, floor=5.0, fixed=1.0),
            charged=516.0,
            payers=[payer("tug", 384.04, 150.0)],
        ),
    ]
    main = BranchBook(
        name="main",
        closes=False,
        margin=-181.96,
        owed=181.96,
        charged=2016.0,
        reserve=ReserveBook(charged=50.0, owed=50.0),
        legs=legs,
        end_mass=900.0,
    )
    return budget(
        closes=False,
        margin=-181.96,
        limiting=Limiting(branch="main", leg=2),
        branches=[main],
        stages=[stage("tug", 420.0, [load(1000.0, 962.0, 0.0)], 1884.04, 1884.04, 0.0)],
        findings=[
            Finding(
                code="payer-dry",
                severity="error",
                message="tug ran dry with 131.96 m/s owed",
                pointer="/mission/legs/2/paid_by",
                remedies=[
                    Remedy(
                        pointer="/vehicle/stages/0/propellants/0/mass",
                        from_=1000.0,
                        to=1080.5,
                        margin=0.0,
                        message="load 80.5 kg more",
                    ),
                    Remedy(pointer="/vehicle/stages/0/engines/0/max_ignitions", from_=2, message="lift the bound"),
                ],
            ),
            Finding(
                code="reserve-unpaid",
                severity="error",
                message="50 m/s of the reserve are owed",
                pointer="/rules/reserve",
                remedies=[Remedy(pointer="/rules/finite_burn", from_=True, to=False, message="leave losses out")],
            ),
        ],
    )


def two_branches() -> Budget:
    """A lander whose ascent stage flies on as the main branch; the margin hangs on the other's reserve."""
    main = BranchBook(
        name="main",
        closes=True,
        margin=520.1239,
        owed=0.0,
        charged=1850.0,
        reserve=ReserveBook(charged=0.0, owed=0.0, slack=520.1239),
        legs=[
            leg("separate"),
            leg(
                "ascend",
                source="stated",
                required=1850.0,
                charged=1850.0,
                slack=520.1239,
                payers=[payer("ascent", 1850.0, 1000.0)],
                burns=[burn("ascent", time=10.0, thrust_to_weight=2.0)],
            ),
        ],
        end_mass=1300.0,
    )
    hopper = BranchBook(
        name="hopper",
        closes=True,
        margin=0.25,
        owed=0.0,
        charged=30.0,
        reserve=ReserveBook(charged=10.0, owed=0.0, slack=0.25),
        legs=[
            leg(
                "deorbit", source="stated", required=30.0, charged=30.0, slack=0.25, payers=[payer("hopper", 30.0, 5.0)]
            )
        ],
        end_mass=300.0,
    )
    return budget(
        margin=0.25,
        limiting=Limiting(branch="hopper"),
        branches=[main, hopper],
        stages=[
            stage("strap-on", 900.0, [load(4000.0, 4000.0, 0.0)], 700.0, 700.0, 0.0, 2),
            stage("hopper", 250.0, [load(60.0, 6.7, 51.3)], 400.0, 40.0, 360.0),
            stage("ascent", 1100.0, [load(1500.0, 1000.0, 500.0)], 2370.0, 1850.0, 520.1),
        ],
    )


def branch_missing() -> Budget:
    """A branch of a part that never separated."""
    main = BranchBook(
        name="main",
        closes=True,
        margin=12.0,
        owed=0.0,
        charged=5.0,
        reserve=ReserveBook(charged=0.0, owed=0.0, slack=12.0),
        legs=[leg("transfer", source="stated", required=5.0, charged=5.0, slack=12.0, payers=[payer("tug", 5.0, 1.0)])],
        end_mass=100.0,
    )
    return budget(
        closes=False,
        margin=12.0,
        limiting=Limiting(branch="main", leg=0),
        branches=[main, BranchBook(name="probe", closes=False, owed=0.0, charged=0.0, legs=[])],
        stages=[stage("tug", 40.0, [load(50.0, 1.0, 48.0)], 17.0, 5.0, 12.0)],
        findings=[
            Finding(
                code="branch-not-started",
                severity="error",
                message="nothing of probe ever separated",
                pointer="/mission/branches/0/of",
                remedies=[],
            )
        ],
    )


def nothing_to_pay() -> Budget:
    """A mission that only waits, on a stage without engines."""
    main = BranchBook(
        name="main",
        closes=True,
        owed=0.0,
        charged=0.0,
        reserve=ReserveBook(charged=0.0, owed=0.0),
        legs=[leg("coast", duration=60.0)],
        end_mass=8.0,
    )
    return budget(branches=[main], stages=[stage("bus", 8.0, [], 0.0, 0.0, 0.0)])


def cubesat() -> Budget:
    """A vehicle of a few kilograms, whose masses need more decimals."""
    main = BranchBook(
        name="main",
        closes=True,
        margin=1.5,
        owed=0.0,
        charged=20.0,
        reserve=ReserveBook(charged=0.0, owed=0.0, slack=1.5),
        legs=[
            leg(
                "deorbit",
                source="computed",
                required=20.0,
                charged=20.0,
                slack=1.5,
                payers=[payer("cold gas", 20.0, 0.0625)],
            )
        ],
        end_mass=4.0,
    )
    return budget(
        margin=1.5,
        limiting=Limiting(branch="main", leg=0),
        branches=[main],
        stages=[stage("cold gas", 12.25, [load(0.0725, 0.0625, 0.005)], 21.5, 20.0, 1.5)],
    )
