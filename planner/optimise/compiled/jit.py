"""One decorator for every kernel, and the same kernels as plain Python.

Numba caches a compiled function under the time stamp of its own file only, so a change in a function it calls would
go unnoticed; the stamp used here is therefore a digest of all kernel files.
"""

from __future__ import annotations

import hashlib
import importlib
import types
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numba
from numba.core.options import DefaultOptions

_KERNELS: dict[str, Any] = {}
_FILES = sorted([*Path(__file__).parent.glob("*.py"), Path(__file__).parent.parent / "tables.py"])
_NEWEST = max(path.stat().st_mtime for path in _FILES)
_STAMP = hashlib.sha256(b"".join(path.read_bytes() for path in _FILES)).hexdigest()


def kernel(function: Callable[..., Any]) -> Any:
    """Compile ``function``, which only other kernels call, on first use; it allocates nothing and holds no lock."""
    return _compile(function, inner=True)


def entry(function: Callable[..., Any]) -> Any:
    """As `kernel`, callable from Python too and cached on disk if a folder can be written."""
    return _compile(function, inner=False)


def _compile(function: Callable[..., Any], *, inner: bool) -> Any:
    options = {"nogil": True, "no_cfunc_wrapper": True, "no_cpython_wrapper": inner}
    if hasattr(DefaultOptions, "_nrt"):
        options["_nrt"] = False  # nothing is allocated, so nothing need be counted
    compiled = numba.njit(**options)(function)
    template = getattr(compiled, "get_call_template", None)
    if template is not None:

        def without_literals(args: Any, keywords: Any) -> Any:
            return template(tuple(numba.types.unliteral(arg) for arg in args), keywords)

        compiled.get_call_template = without_literals  # else each constant handed over is compiled for on its own
    if not inner:
        _cache(compiled)
    _KERNELS[function.__name__] = compiled
    return compiled


def _cache(compiled: Any) -> None:
    try:
        compiled.enable_caching()
    except RuntimeError:  # no folder can be written: compile anew in each process
        return
    file: Any = getattr(getattr(compiled, "_cache", None), "_cache_file", None)
    if hasattr(file, "_source_stamp"):
        file._source_stamp = _STAMP


class Plain:
    """The kernels as plain Python: the same code objects, calling each other uncompiled.

    Attributes are the kernels by name.
    """

    visits = 40  # of `branch` in a piece of about 0.05 s

    def __init__(self) -> None:
        for module in ("anneal", "branch"):  # these two import all others
            importlib.import_module(f"planner.optimise.compiled.{module}")
        spaces = {id(c.py_func.__globals__): dict(c.py_func.__globals__) for c in _KERNELS.values()}
        self._kernels: dict[str, Any] = {}
        for name, compiled in _KERNELS.items():
            function = compiled.py_func
            space = spaces[id(function.__globals__)]
            self._kernels[name] = types.FunctionType(function.__code__, space, name)
        for space in spaces.values():
            space.update({name: self._kernels[name] for name in space if space[name] is _KERNELS.get(name)})

    def __getattr__(self, name: str) -> Any:
        try:
            return self.__dict__["_kernels"][name]
        except KeyError:
            raise AttributeError(name) from None


def cache_folder() -> Path | None:
    """Where compiled kernels are kept; None if no folder can be written."""
    found = getattr(_KERNELS["anneal"].stats, "cache_path", None) if "anneal" in _KERNELS else None
    return Path(found) if found else None


def cache_is_warm(name: str) -> bool:
    """Whether a compiled copy of kernel ``name`` seems to lie on disk, by time stamps: a guess that costs only time."""
    folder = cache_folder()
    if folder is None:
        return False
    source = Path(_KERNELS[name].py_func.__code__.co_filename).stem
    # the index is written before what it points to
    return all(
        any(path.stat().st_mtime > _NEWEST for path in folder.glob(f"{source}.{name}-*.{kind}"))
        for kind in ("nbi", "nbc")
    )
