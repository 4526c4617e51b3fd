"""The solar catalogue as it is told to whoever asks."""

from burntally.model.errors import NotFoundError
from burntally.model.names import unknown_name
from burntally.model.operations import Bodies, BodyRecord
from burntally_service.bodies.body import Body
from burntally_service.bodies.solar import catalogue

__all__ = ["body_named", "list_bodies"]


def list_bodies() -> Bodies:
    """Tell every body of the solar catalogue, each after its parent.

    Returns
    -------
    Bodies
        The records.
    """
    return Bodies(bodies=[_record(body) for body in catalogue().values()])


def body_named(name: str) -> BodyRecord:
    """Tell one body of the solar catalogue.

    Parameters
    ----------
    name : str
        Name of the body.

    Returns
    -------
    BodyRecord
        Its record.

    Raises
    ------
    burntally.model.errors.NotFoundError
        If there is no such body; it names those that there are.

    Examples
    --------
    >>> body_named("moon").parent
    'earth'
    """
    body = catalogue().get(name)
    if body is None:
        raise NotFoundError([unknown_name("body", name, known=catalogue(), pointer="/name")])
    return _record(body)


def _record(body: Body) -> BodyRecord:
    has_orbit = body.sma is not None
    return BodyRecord(
        name=body.name,
        parent=body.parent,
        gravitational_parameter=body.mu,
        radius=body.radius,
        radius_kind=body.radius_kind,
        # Without air there is no top to tell, and the root of the system has no sphere around it.
        atmosphere_top=body.atmosphere_top or None,
        semi_major_axis=body.sma,
        sphere_of_influence=body.soi_radius if has_orbit else None,
        source=body.source,
    )
