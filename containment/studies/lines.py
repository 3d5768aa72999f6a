"""Records as JSON lines, written column by column: one line a case, its number first."""

import json
import math
from collections.abc import Mapping, Sequence
from typing import Any

__all__ = ["lines_of"]


def lines_of(
    start: int, inputs: Mapping[str, Sequence[Any]], responses: Mapping[str, Sequence[Any]], errors: Sequence[str | None]
) -> bytes:
    r"""Return one JSON line a case.

    Parameters
    ----------
    start : int
        Number of the first case.
    inputs, responses : mapping
        Columns by their key; numbers that are not finite become null.
    errors : sequence of str or None
        What kept a case from being judged; the key ``error`` stands only where there is one.

    Examples
    --------
    >>> lines_of(7, {"depth_m": [0.03]}, {"verdict": ["held"], "margin": [float("inf")]}, [None])
    b'{"i":7,"depth_m":0.03,"verdict":"held","margin":null}\n'
    """
    count = len(errors)
    columns = [_texts(key, column) for key, column in (*inputs.items(), *responses.items())]
    if not columns:
        columns = [[""] * count]
    ends = ["}\n" if error is None else f',"error":{json.dumps(error)}}}\n' for error in errors]
    parts = zip(map(str, range(start, start + count)), map(",".join, zip(*columns, strict=True)), ends, strict=True)
    return "".join([f'{{"i":{i},{body}{end}' for i, body, end in parts]).encode("ascii")


def _texts(key: str, column: Sequence[Any]) -> list[str]:
    """Return ``"key":value`` of each value; words are encoded once each."""
    head = json.dumps(key) + ":"
    values = column.tolist() if hasattr(column, "tolist") else column
    known: dict[Any, str] = {}
    texts = []
    for value in values:
        if type(value) is float:
            texts.append(head + (repr(value) if math.isfinite(value) else "null"))
            continue
        kept = (type(value), value)
        text = known.get(kept)
        if text is None:
            text = known[kept] = head + json.dumps(value)
        texts.append(text)
    return texts
