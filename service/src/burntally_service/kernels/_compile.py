"""The one door to numba: the compiled twin of a kernel, made when it is first asked for.

numba is imported inside the functions here, because a process that computes single designs must never pay for it.
"""

import functools
import hashlib
import os
import sys
import tempfile
import threading
from collections.abc import Callable, Iterator, Mapping
from pathlib import Path
from types import FunctionType
from typing import Any, Final, ParamSpec, TypeGuard, TypeVar, cast

__all__ = ["cache_directory", "compiled", "kernel_digest", "rebound"]

_P = ParamSpec("_P")
_R = TypeVar("_R")

_PACKAGE: Final = __name__.rpartition(".")[0]
_DIGEST_LENGTH: Final = 16

_twins: dict[FunctionType, Callable[..., object]] = {}
_lock = threading.RLock()


def compiled(kernel: Callable[_P, _R]) -> Callable[_P, _R]:
    """Compiled twin of a kernel, with the same signature and the same bits.

    The kernels that it calls by name are replaced by their own twins, recursively. The twin is made once for a
    process and kept; its machine code is kept on disk where a directory can be written.

    Parameters
    ----------
    kernel : callable
        Plain function defined in the kernels package.

    Returns
    -------
    callable
        The twin. It takes floats, named tuples of floats, float64 arrays in place of sequences of floats, and
        structured arrays (see `_records`) in place of sequences of named tuples.

    Raises
    ------
    TypeError
        If `kernel` is not a plain function of the kernels package.

    Examples
    --------
    >>> from burntally_service.kernels.rocket import exhaust_speed
    >>> compiled(exhaust_speed)(300.0) == exhaust_speed(300.0)
    True
    """
    if not _is_kernel(kernel):
        message = f"{kernel!r} is not a plain function of {_PACKAGE}"
        raise TypeError(message)
    with _lock:
        return cast("Callable[_P, _R]", _twin(kernel))


@functools.cache
def kernel_digest() -> str:
    """Digest of the source text of all kernels.

    It names the cache folder, since numba's own cache looks at one file alone and serves stale code after an edit in
    a kernel that this one calls.

    Returns
    -------
    str
        Hexadecimal digits.
    """
    digest = hashlib.sha256()
    folder = Path(__file__).parent
    for path in sorted(folder.rglob("*.py")):
        digest.update(path.relative_to(folder).as_posix().encode())
        digest.update(path.read_bytes())
    return digest.hexdigest()[:_DIGEST_LENGTH]


@functools.cache
def cache_directory() -> Path | None:
    """Folder for machine code of these very sources, or None where nothing can be written.

    Returns
    -------
    pathlib.Path or None
        Below ``NUMBA_CACHE_DIR`` if that is set, otherwise below the user's cache directory. None means that the
        twins are compiled anew in each process.
    """
    for base in _cache_bases():
        folder = base / kernel_digest()
        if _is_writable(folder):
            return folder
    return None


def _cache_bases() -> Iterator[Path]:
    """Yield the directories to try, the user's wish first."""
    wished = os.environ.get("NUMBA_CACHE_DIR")
    if wished:
        yield Path(wished)
        return
    standard = os.environ.get("XDG_CACHE_HOME")
    if standard:
        yield Path(standard) / "burntally"
    elif "HOME" in os.environ:
        yield Path(os.environ["HOME"]) / ".cache" / "burntally"


def _is_writable(folder: Path) -> bool:
    """Tell by writing: permission bits lie on read-only mounts and for the superuser."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder):
            return True
    except OSError:
        return False


def _is_kernel(thing: object) -> TypeGuard[FunctionType]:
    """Tell whether something is a plain function of the kernels package."""
    return isinstance(thing, FunctionType) and f"{thing.__module__}.".startswith(f"{_PACKAGE}.")


def _twin(kernel: FunctionType) -> Callable[..., object]:
    """Make the twin of a kernel after the twins of those that it calls."""
    if kernel not in _twins:
        _twins[kernel] = _compile(rebound(kernel, _twin, {}))
    return _twins[kernel]


def rebound(
    kernel: FunctionType, twin_of: Callable[[FunctionType], Callable[..., object]], others: Mapping[str, object]
) -> FunctionType:
    """Copy a kernel so that it calls other things by the names that it uses.

    Parameters
    ----------
    kernel
        Plain function of the kernels package.
    twin_of
        Gives what is called in place of each kernel among its globals.
    others
        What else its globals shall mean, by name.

    Returns
    -------
    function
        The copy.
    """
    names = {**kernel.__globals__, **others}
    for name in kernel.__code__.co_names:
        if _is_kernel(callee := names.get(name)):
            names[name] = twin_of(callee)
    copy = FunctionType(kernel.__code__, names, kernel.__name__, kernel.__defaults__, kernel.__closure__)
    copy.__module__ = kernel.__module__
    copy.__qualname__ = kernel.__qualname__
    return copy


def _compile(function: FunctionType) -> Callable[..., object]:
    """Hand a function to numba, with a cache if there is a place for one."""
    import numba

    folder = cache_directory()
    # numba reads this setting when the dispatcher is made; it is put back so that others keep their own.
    settings: dict[str, Any] = vars(sys.modules["numba.core.config"])
    before = settings["CACHE_DIR"]
    settings["CACHE_DIR"] = str(folder)
    try:
        # No fastmath and no vectorised library: both would change bits between the gears and between processors.
        return numba.njit(
            function,
            cache=folder is not None,
            nogil=True,
            error_model="numpy",
        )
    finally:
        settings["CACHE_DIR"] = before
