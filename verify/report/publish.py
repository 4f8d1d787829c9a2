"""The files that are handed over with a certificate."""

from __future__ import annotations

from collections.abc import Mapping
from importlib.util import find_spec
from typing import TYPE_CHECKING

from verify.errors import missing_extra
from verify.report.page_recheck import RECHECK, rechecker

if TYPE_CHECKING:
    from verify.derivation.family import LawFamily
    from verify.report.page_blocks import Page

OVERVIEW = "index"


def certificate_files(
    name: str, data: bytes, *, paper: str = "a4", pdf: bool = True, family: LawFamily | None = None
) -> dict[str, bytes]:
    """Return file name -> bytes: the certificate, its twin, its page in HTML and PDF, and the rechecker.

    Parameters
    ----------
    name : str
        Without ``.cert.json``.
    data : bytes
        The certificate.
    paper : str
        "a4" or "letter".
    pdf : bool
        Whether to make the PDF.
    family : LawFamily, optional
        See ``certificate_page``.
    """
    from verify.report.page import certificate_page

    page = certificate_page(name, data, family)
    stored = {f"{name}.cert.json": data, f"{name}.cert.txt": data, RECHECK: rechecker()}
    return stored | _printed(name, page, paper, pdf)


def overview_files(certificates: Mapping[str, bytes], *, paper: str = "a4", pdf: bool = True) -> dict[str, bytes]:
    """Return the overview page of a bundle, in HTML and PDF."""
    from verify.report.overview import overview_page

    return _printed(OVERVIEW, overview_page(certificates), paper, pdf)


def require_printers(*, pdf: bool = True) -> None:
    """Look whether what the page needs is installed.

    Raises
    ------
    InputError
        When it is not.
    """
    for module in ("jinja2", "matplotlib", *(("typst",) if pdf else ())):
        if find_spec(module) is None:
            raise missing_extra(f"the page needs {module}", "report")


def _printed(name: str, page: Page, paper: str, pdf: bool) -> dict[str, bytes]:
    from verify.report.page_html import page_html
    from verify.report.page_pdf import page_pdf

    files = {f"{name}.html": page_html(page)}
    return files | {f"{name}.pdf": page_pdf(page, paper)} if pdf else files
