"""What the server counts of itself, for Prometheus."""

from collections.abc import Iterator

from prometheus_client import CollectorRegistry, Counter, Gauge, Histogram, generate_latest
from prometheus_client.core import GaugeMetricFamily
from prometheus_client.metrics_core import Metric
from prometheus_client.registry import Collector

from server.storage.condition import Condition

CONTENT_TYPE = "text/plain; version=0.0.4; charset=utf-8"
_DURATIONS_S = (0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1.0, 2.5, 10.0)


class Metrics:
    """The counters of one running server; each application has its own."""

    def __init__(self) -> None:
        self.registry = CollectorRegistry()
        self.requests = Counter(
            "ampledger_requests",
            "Requests answered.",
            ("method", "route", "status"),
            registry=self.registry,
        )
        self.durations_s = Histogram(
            "ampledger_request_seconds",
            "Time from the first byte of a request to the last of its answer.",
            ("route",),
            buckets=_DURATIONS_S,
            registry=self.registry,
        )
        self.underway = Gauge(
            "ampledger_requests_underway", "Requests being answered now.", registry=self.registry
        )
        self.rows = Counter(
            "ampledger_rows_taken_in",
            "Rows taken in since the server started, by sheet and by what became of them.",
            ("sheet", "status"),
            registry=self.registry,
        )
        self.catch_up_failures = Counter(
            "ampledger_catch_up_failures",
            "Times that figures could not be brought up to date.",
            registry=self.registry,
        )

    def text(self, condition: Condition) -> bytes:
        """Everything counted, with the condition of the books, as Prometheus reads it."""
        books = CollectorRegistry()
        books.register(_Books(condition))
        return generate_latest(self.registry) + generate_latest(books)


class _Books(Collector):
    """The condition of the books as gauges."""

    def __init__(self, condition: Condition) -> None:
        self._condition = condition

    def collect(self) -> Iterator[Metric]:
        """Each gauge with its value."""
        stored = GaugeMetricFamily(
            "ampledger_rows_stored", "Rows in the books, by sheet.", labels=["sheet"]
        )
        for sheet, rows in self._condition.rows_stored.items():
            stored.add_metric([sheet], rows)
        yield stored
        for name, what, value in (
            ("held_rows", "Rows held until someone mends or drops them.", "held_rows"),
            ("suspect_readings", "Readings that nobody has decided on.", "open_suspicions"),
            ("open_flags", "Flags that are open.", "open_flags"),
            ("stale_stretches", "Stretches of time whose figures lag.", "stale_stretches"),
            ("database_bytes", "Size of the database.", "database_bytes"),
        ):
            yield GaugeMetricFamily(
                f"ampledger_{name}", what, value=getattr(self._condition, value)
            )
