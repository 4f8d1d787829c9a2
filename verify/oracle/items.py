"""Case files as pytest items."""

from __future__ import annotations

import os
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

from verify.oracle.settings import SUFFIX, digits_of

if TYPE_CHECKING:
    from verify.casebook.outcome import Result


class CaseFailed(Exception):  # noqa: N818 (an outcome, not a mistake of this program)
    """A case that did not pass."""

    def __init__(self, result: Result) -> None:
        super().__init__(result.outcome.value)
        self.result = result


class CaseFile(pytest.File):
    """One case file."""

    def collect(self) -> Iterator[CaseItem]:
        """Yield the one item of it."""
        item: CaseItem = CaseItem.from_parent(self, name=self.path.name.removesuffix(SUFFIX))
        yield item


class CaseItem(pytest.Item):
    """Runs a case; anything but a pass is a failure, never a skip."""

    def __init__(self, **keywords: Any) -> None:
        super().__init__(**keywords)
        self.add_marker("sidecheck")

    def runtest(self) -> None:
        """Run the case.

        Raises
        ------
        CaseFailed
            When it does not pass.
        """
        from verify.casebook.run import How, run_case_file

        result = run_case_file(_short(self.path), How(digits=digits_of(self.config)))
        if not result.passed:
            raise CaseFailed(result)

    def repr_failure(self, excinfo: pytest.ExceptionInfo[BaseException], style: Any = None) -> Any:
        """Show why a case did not pass, without a traceback of ours."""
        if not isinstance(excinfo.value, CaseFailed):
            return super().repr_failure(excinfo, style)
        result = excinfo.value.result
        first = result.messages[0].line if result.messages else None
        place = result.path + (f":{first}" if first else "")
        return "\n".join([f"{place}: {result.outcome.value}", *(f"  {message}" for message in result.messages)])

    def reportinfo(self) -> tuple[Path, int | None, str]:
        """Name the case in a report."""
        return self.path, None, f"case {self.name}"


def _short(path: Path) -> str:
    """The path from here, when that is shorter."""
    return min(str(path), os.path.relpath(path), key=len)
