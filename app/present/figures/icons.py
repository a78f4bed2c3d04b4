"""Icon arrays: everybody in the denominator drawn, in reading order, three classes, one path a class."""

from __future__ import annotations

from dataclasses import dataclass

from markupsafe import Markup

# A head and a body, about the middle of a cell, in relative moves: repeated once per person.
_HEAD = "m0-7.4a2.2 2.2 0 1 1 0 4.4a2.2 2.2 0 1 1 0-4.4z"
_BODY = "m-2.6 5.2h5.2a1.2 1.2 0 0 1 1.2 1.2v4h-1.6v4.4h-4.4v-4.4h-1.6v-4a1.2 1.2 0 0 1 1.2-1.2z"
_PERSON = _HEAD + _BODY
_END = (-2.6, -2.2)  # from the middle of the cell to where the body began


@dataclass(frozen=True, slots=True)
class Layout:
    """How many people stand in a row, and how far apart; groups of five or ten are set off by a gap."""

    per_row: int
    group: int
    width: float
    height: float
    gap: float


LAYOUTS = {
    100: Layout(per_row=10, group=5, width=17.0, height=20.0, gap=7.0),
    1000: Layout(per_row=40, group=10, width=11.0, height=20.0, gap=9.0),
}


def _center(index: int, layout: Layout) -> tuple[float, float]:
    row, column = divmod(index, layout.per_row)
    x = (column + 0.5) * layout.width + column // layout.group * layout.gap
    y = (row + 0.5) * layout.height + row // layout.group * layout.gap
    return x, y


def _path(first: int, count: int, layout: Layout) -> str:
    """People one after the other. Each move is relative, so that a row is one text repeated, which packs well."""
    x, y = _center(first, layout)
    moves = [f"M{x:g} {y:g}{_PERSON}"]
    for index in range(first + 1, first + count):
        before, (x, y) = (x, y), _center(index, layout)
        # A person's outline ends where its body began.
        moves.append(f"m{x - before[0] - _END[0]:g} {y - before[1] - _END[1]:g}{_PERSON}")
    return "".join(moves)


def icon_array(event: int, net: int, *, more: bool, out_of: int, arm: str, description: str) -> Markup:
    """One arm's array.

    Parameters
    ----------
    event, net : int
        People with the event, and the net fewer or more beside the comparator; the rest have none.
    more : bool
        Whether the net are more (people with the event) rather than fewer.
    out_of : int
        100 or 1000, the same for both arms.
    arm : "intervention" or "comparator"
        Gives the colour class.
    description : str
        The same numbers in words.
    """
    layout = LAYOUTS[out_of]
    rows = out_of // layout.per_row
    width = layout.per_row * layout.width + (layout.per_row // layout.group - 1) * layout.gap
    height = rows * layout.height + (-(-rows // layout.group) - 1) * layout.gap
    classes = (
        ("with-event", 0, event),
        ("net-more" if more else "net-fewer", event, net),
        ("no-event", event + net, out_of - event - net),
    )
    paths = "".join(f'<path class="{name}" d="{_path(first, count, layout)}"/>' for name, first, count in classes if count)
    return Markup('<svg class="people {arm} of-{n}" viewBox="0 0 {w:g} {h:g}" role="img" aria-label="{d}">{s}</svg>').format(
        arm=arm, n=out_of, w=width, h=height, d=description, s=Markup(paths)
    )
