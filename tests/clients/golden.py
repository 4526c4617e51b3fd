"""What a Python program says with the generated client, and what a server answers to it.

It runs beside `burntally_client`, the generated package, in an environment without the project. Called with a server's
address and the contract's file, it prints what was answered, by operation.
"""

import json
import sys
from pathlib import Path
from typing import Any

from burntally_client import Client
from burntally_client.api.bodies import get_body, list_bodies
from burntally_client.api.budgets import create_budget
from burntally_client.api.performance import compute_performance
from burntally_client.api.rules import get_rules, list_rules
from burntally_client.api.transfers import plan_transfer
from burntally_client.models import (
    Budget,
    Design,
    Flyby,
    Orbit,
    PerformanceRequest,
    Problem,
    Transfer,
    TransferRequest,
    TransferStrategy,
)


def example(contract: dict[str, Any], path: str, name: str) -> dict[str, Any]:
    """One of the contract's example requests."""
    content = contract["paths"][path]["post"]["requestBody"]["content"]["application/json"]
    value: dict[str, Any] = content["examples"][name]["value"]
    return value


def read_again(design: dict[str, Any]) -> dict[str, Any]:
    """A design after the client's types have read and written it."""
    return Design.from_dict(design).to_dict()


def answers(client: Client, contract: dict[str, Any]) -> dict[str, Any]:
    """What the server answers to the first example of each operation."""
    lifter = PerformanceRequest.from_dict(example(contract, "/v1/performance", "lifter"))
    leg = TransferRequest.from_dict(example(contract, "/v1/transfers", "raise"))
    told = {
        "create_budget": create_budget.sync(
            client=client, body=Design.from_dict(example(contract, "/v1/budgets", "tug"))
        ),
        "compute_performance": compute_performance.sync(client=client, body=lifter),
        "plan_transfer": plan_transfer.sync(client=client, body=leg),
        "list_bodies": list_bodies.sync(client=client),
        "get_body": get_body.sync("earth", client=client),
        "list_rules": list_rules.sync(client=client),
        "get_rules": get_rules.sync("esa-2012", client=client),
    }
    return {operation: answer.to_dict() for operation, answer in told.items() if answer is not None}


def problem_of(client: Client, design: dict[str, Any]) -> dict[str, Any]:
    """The problem that a design is refused with."""
    told: Budget | Problem | None = create_budget.sync(client=client, body=Design.from_dict(design))
    assert isinstance(told, Problem)
    return told.to_dict()


def built() -> Transfer:
    """A leg in the client's own types; a quantity is a number, or a text with its unit."""
    return Transfer(kind="transfer", to=Orbit(altitude="1200 km"), strategy=TransferStrategy.HOHMANN, time_limit=5400)


def main(address: str, contract_file: str) -> None:
    """Ask everything and print what was answered."""
    contract = json.loads(Path(contract_file).read_text(encoding="utf-8"))
    tug = example(contract, "/v1/budgets", "tug")
    unreadable = tug | {"vehicle": tug["vehicle"] | {"payloads": [{"name": "relay", "mass": "7 s"}]}}
    flyby = Flyby(kind="flyby", delta_v="12 m/s", paid_by=["nobody"]).to_dict()
    contradicting = tug | {"mission": tug["mission"] | {"legs": [flyby]}}
    with Client(base_url=address) as client:
        told = {
            "answers": answers(client, contract),
            "problems": {
                "unreadable": problem_of(client, unreadable),
                "contradicting": problem_of(client, contradicting),
            },
            "read_again": read_again(tug),
            "built": built().to_dict(),
        }
    json.dump(told, sys.stdout)


if __name__ == "__main__":
    main(*sys.argv[1:])
