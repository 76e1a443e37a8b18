"""The table [reduction] of a mechanism that was made from a larger one: how it came about, checked and otherwise kept."""

from ..entry import Entry

_TEXTS = ("parent", "parent_sha256", "method", "program")
_LISTS = ("sources", "keep", "limits", "removed_in_last_pass")
_NUMBERS = ("parent_species", "parent_reactions", "threshold", "certain", "margin", "conditions")
_SPANS = ("temperature", "pressure")


def check_reduction(top: Entry) -> None:
    """Checks the table, if it is there: parent and its digest stated, no key unknown."""
    if "reduction" not in top.data:
        return
    table = top.table("reduction")
    for key in _TEXTS:
        table.text(key) if key.startswith("parent") else table.text(key, "")
    for key in _LISTS:
        table.texts(key, ())
    for key in _NUMBERS:
        table.number(key, 0.0, "not negative")
    for key in _SPANS:
        table.numbers(key, ())
    table.named_numbers("errors", "measure", sign="any", default={})
    table.done()
