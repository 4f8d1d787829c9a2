"""Which case files there are."""

from __future__ import annotations

import os
from collections.abc import Iterator, Sequence
from fnmatch import fnmatchcase
from pathlib import Path

from verify.errors import InputError
from verify.problem.casefile import SUFFIX


def find_cases(places: Sequence[str | Path], only: Sequence[str] = ()) -> tuple[str, ...]:
    """Return the case files in some folders (and the files named themselves), each once, in order of their names.

    Parameters
    ----------
    places : sequence of path
        Folders, searched to the bottom (hidden ones left out), and files.
    only : sequence of str
        Patterns such as ``lot-*`` or ``published/*``; a case is taken when one of them fits its name. None: all.

    Raises
    ------
    InputError
        When a place does not exist, or there is no case at all: a run of nothing must not look like a success.
    """
    found: dict[str, str] = {}
    for place in places:
        for path in _files(Path(place)):
            found.setdefault(os.path.realpath(path), str(path))
    if not found:
        where = " ".join(map(str, places)) or "nothing"
        raise InputError("there is no case file here", f"case files are named NAME{SUFFIX}", file=where)
    chosen = tuple(path for path in found.values() if not only or any(fits(path, pattern) for pattern in only))
    if not chosen:
        names = ", ".join(case_name(path) for path in list(found.values())[:3])
        raise InputError(f"no case is named {' or '.join(only)}", f"the cases are {names}, ...", key="--only")
    return chosen


def _files(place: Path) -> Iterator[Path]:
    if place.is_file():
        yield place
        return
    if not place.is_dir():
        raise InputError("there is no such folder or file", "give folders of case files", file=str(place))
    for folder, folders, names in os.walk(place):
        folders[:] = sorted(name for name in folders if not name.startswith("."))
        yield from (Path(folder) / name for name in sorted(names) if name.endswith(SUFFIX))


def case_name(path: str | Path) -> str:
    """Return the short name of a case: its folder and its file.

    Examples
    --------
    >>> case_name("casebook/demo/lot-release.case.toml")
    'demo/lot-release'
    """
    place = Path(path)
    name = place.name.removesuffix(SUFFIX)
    return f"{place.parent.name}/{name}" if place.parent.name else name


def fits(path: str | Path, pattern: str) -> bool:
    """Whether a pattern fits a case: its name, or the end of its path with the folders that the pattern names.

    Examples
    --------
    >>> path = "casebook/demo/lot-release.case.toml"
    >>> fits(path, "lot-*"), fits(path, "demo/*"), fits(path, "release"), fits(path, "laws/*")
    (True, True, False, False)
    """
    whole = Path(path).as_posix().removesuffix(SUFFIX)
    wanted = pattern.removesuffix(SUFFIX)
    tail = "/".join(whole.split("/")[-(wanted.count("/") + 1) :])
    return fnmatchcase(tail, wanted) or fnmatchcase(whole, wanted)
