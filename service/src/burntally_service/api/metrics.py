"""Metrics of the service, for Prometheus; every label has few values, whatever is sent."""

from importlib.metadata import version
from platform import python_version
from typing import Final

import prometheus_client
from prometheus_client import CollectorRegistry, Counter, Gauge, Histogram, ProcessCollector
from prometheus_client.exposition import CONTENT_TYPE_PLAIN_0_0_4, generate_latest

__all__ = ["EXPOSITION", "Metrics"]

EXPOSITION: Final = CONTENT_TYPE_PLAIN_0_0_4
"""Media type of the exposition: the text form, which every version of Prometheus reads."""

# From a small answer in closed form to the longest that a computation may take.
_BUCKETS_S: Final = (0.001, 0.0025, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1.0, 2.5, 5.0, 10.0, 30.0)

# A series that tells when each counter was made says nothing that the start of the process does not.
prometheus_client.disable_created_metrics()  # type: ignore[no-untyped-call]  # the library's own lack


class Metrics:
    """Counts what is asked and what is answered, in a registry of its own."""

    def __init__(self) -> None:
        self._registry = CollectorRegistry()
        self._requests = Counter(
            "burntally_http_requests",
            "Requests answered.",
            ("operation", "method", "status"),
            registry=self._registry,
        )
        self._durations = Histogram(
            "burntally_http_request_duration_seconds",
            "Time from a request's head to the end of its answer.",
            ("operation",),
            buckets=_BUCKETS_S,
            registry=self._registry,
        )
        self._in_flight = Gauge(
            "burntally_http_requests_in_flight", "Requests that are being answered.", registry=self._registry
        )
        self._refusals = Counter(
            "burntally_refusals", "Requests refused, by the code of the problem.", ("problem",), registry=self._registry
        )
        build = Gauge("burntally_build_info", "Versions; always 1.", ("version", "python"), registry=self._registry)
        build.labels(version("burntally-service"), python_version()).set(1)
        ProcessCollector(registry=self._registry)
        # To find a labelled series again takes four times as long as to add to it.
        self._series: dict[tuple[str, str, str], tuple[Counter, Histogram]] = {}

    def begin(self) -> None:
        """Count a request in."""
        self._in_flight.inc()

    def end(self, operation: str, method: str, *, status: int | None, duration_s: float, problem: str | None) -> None:
        """Count a request out.

        Parameters
        ----------
        operation, method : str
            Id of the operation and verb of the request, out of a few.
        status : int or None
            Status of the answer; None: there was none, since the caller hung up.
        duration_s : float
            How long it took.
        problem : str or None
            Code of the problem that it was refused with.
        """
        self._in_flight.dec()
        key = (operation, method, f"{status // 100}xx" if status else "none")
        series = self._series.get(key)
        if series is None:
            series = self._series[key] = self._requests.labels(*key), self._durations.labels(operation)
        series[0].inc()
        series[1].observe(duration_s)
        if problem is not None:
            self._refusals.labels(problem).inc()

    def refuse(self, method: str, *, status: int, problem: str, count: int) -> None:
        """Count requests that were refused before they were looked at."""
        self._requests.labels("none", method, f"{status // 100}xx").inc(count)
        self._refusals.labels(problem).inc(count)

    def exposition(self) -> bytes:
        """Write all of them."""
        return generate_latest(self._registry)
