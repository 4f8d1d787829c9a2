"""How an object shows itself in a notebook: as it prints in a terminal."""

from __future__ import annotations

from html import escape


class Shown:
    """Gives an object that prints well a notebook form.

    Examples
    --------
    >>> class Answer(Shown):
    ...     def __str__(self):
    ...         return "8 < lam"
    >>> Answer()._repr_html_()
    '<pre>8 &lt; lam</pre>'
    """

    def _repr_html_(self) -> str:
        return f"<pre>{escape(str(self))}</pre>"
