"""The documentation page: all of the contract, from this service alone."""

import re
from html.parser import HTMLParser
from typing import Any

import pytest
from litestar.testing import TestClient

Client = TestClient[Any]

PAGES = ["/docs", "/problems", "/problems/uncomputable"]


class Reader(HTMLParser):
    """Collects what a page refers to, and what can be referred to in it."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.loaded: list[str] = []
        self.links: list[str] = []
        self.ids: list[str] = []
        self.inline: list[str] = []
        self.feed(text)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        named = {name: value or "" for name, value in attrs}
        self.ids += [named["id"]] if "id" in named else []
        if tag in {"script", "img", "iframe", "link"}:
            self.loaded.append(named.get("src") or named.get("href", ""))
        elif tag == "a":
            self.links.append(named["href"])
        self.inline += [name for name in named if name == "style" or name.startswith("on")]
        self.inline += ["script"] if tag == "script" and "src" not in named else []


def read(client: Client, path: str) -> Reader:
    return Reader(client.get(path, headers={"Accept": "text/html"}).text)


@pytest.mark.parametrize("path", PAGES)
def test_nothing_is_loaded_from_elsewhere(path: str, client: Client) -> None:
    loaded = read(client, path).loaded
    assert loaded
    assert [client.get(name).status_code for name in loaded if name.startswith("/docs/")] == [200] * len(loaded)


@pytest.mark.parametrize("path", PAGES)
def test_nothing_needs_a_laxer_policy(path: str, client: Client) -> None:
    response = client.get(path, headers={"Accept": "text/html"})
    assert response.headers["content-security-policy"].startswith("default-src 'self';")
    assert Reader(response.text).inline == []


@pytest.mark.parametrize("path", PAGES)
def test_every_link_leads_somewhere(path: str, client: Client) -> None:
    page = read(client, path)
    within = {link[1:] for link in page.links if link.startswith("#")}
    assert within <= set(page.ids)
    outside = {link for link in page.links if not link.startswith("#")}
    assert {client.get(link).status_code for link in outside} <= {200}


def test_an_identity_is_given_once(client: Client) -> None:
    ids = read(client, "/docs").ids
    assert len(ids) == len(set(ids))


def test_it_holds_every_operation_and_schema(client: Client, document: dict[str, Any]) -> None:
    ids = set(read(client, "/docs").ids)
    operations = {node["operationId"] for methods in document["paths"].values() for node in methods.values()}
    assert operations | set(document["components"]["schemas"]) <= ids


def test_it_tells_every_code_that_an_operation_may_refuse_with(client: Client) -> None:
    page = client.get("/docs").text
    told = re.search(r'id="create_budget".*?<ul class="problems">(.*?)</ul>', page, re.DOTALL)
    assert told is not None
    codes = set(re.findall(r'href="/problems/([a-z-]+)"', told[1]))
    assert {"inconsistent-request", "uncomputable", "overloaded", "took-too-long"} <= codes


def test_it_says_what_it_is_not_for(client: Client) -> None:
    assert "Not for flight safety, range safety, licensing or operations." in client.get("/docs").text


def test_scripts_and_styles_name_no_other_host(client: Client) -> None:
    assets = [client.get(path).text for path in ("/docs/docs.js", "/docs/docs.css")]
    assert [re.findall(r"https?://|//[a-z]+\.", text) for text in assets] == [[], []]
