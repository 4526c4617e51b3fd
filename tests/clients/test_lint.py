"""What other makers' linters of OpenAPI have to say about the contract: nothing."""

from tests.clients.conftest import CONTRACT, ROOT, Tools

RULES = ROOT / "openapi"


def test_spectral_has_no_finding(tools: Tools) -> None:
    said = tools.node_tool("spectral", "lint", "-F", "hint", "--ruleset", RULES / "spectral.yaml", CONTRACT)
    assert "No results with a severity of 'hint' or higher found" in said


def test_redocly_has_no_finding(tools: Tools) -> None:
    said = tools.node_tool("redocly", "lint", "--config", RULES / "redocly.yaml", CONTRACT)
    assert "Your API description is valid" in said
    assert "problem" not in said
