"""Headers that stand with every answer of an operation: where the service is described, and whether the operation goes.

References
----------
.. [1] RFC 8631, "Link Relation Types for Web Services", sec. 4: `service-desc` and `service-doc`.
.. [2] RFC 9745, "The Deprecation HTTP Response Header Field", secs. 2 and 3.
.. [3] RFC 8594, "The Sunset HTTP Header Field", sec. 3.
"""

from datetime import UTC, date, datetime, time
from email.utils import format_datetime
from typing import Final

from burntally_service.operations import Operation

__all__ = ["SERVICE_LINKS", "standing_headers"]

SERVICE_LINKS: Final = '</openapi.json>; rel="service-desc", </docs>; rel="service-doc"'


def standing_headers(operation: Operation) -> dict[str, str]:
    """Make the headers of an operation that are the same with each of its answers.

    Parameters
    ----------
    operation
        Row of the table; its `retirement` tells whether it is to go.

    Returns
    -------
    dict of str to str
        `Link`; for an operation that is to go `Deprecation`, and `Sunset` once the day is set.
    """
    retirement = operation.retirement
    if retirement is None:
        return {"Link": SERVICE_LINKS}
    links = [SERVICE_LINKS, f'</docs#{operation.id}>; rel="deprecation"; type="text/html"']
    headers = {"Deprecation": f"@{_midnight(retirement.deprecated).timestamp():.0f}"}
    if retirement.sunset is not None:
        headers["Sunset"] = format_datetime(_midnight(retirement.sunset), usegmt=True)
    if retirement.successor is not None:
        links.append(f'<{retirement.successor}>; rel="successor-version"')
    return headers | {"Link": ", ".join(links)}


def _midnight(day: date) -> datetime:
    return datetime.combine(day, time(), UTC)
