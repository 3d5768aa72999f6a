"""Reading a plan from TOML or from a mapping: checked whole, every fault named at once."""

import difflib
import math
import tomllib
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import Any, Final

import numpy as np

from containment.errors import InputError
from containment.studies.distributions import Distribution, distribution
from containment.studies.inputs import input_value, inputs_of
from containment.studies.plan import COSTLY_RESPONSE, METHODS, RESPONSES, Axis, Plan
from containment.studies.plan_sense import faults_of_sense

__all__ = ["plan_from", "read_plan"]

_TABLES: Final = ("study", "fixed", "vary", "together", "uncertain", "sample")
_STUDY_KEYS: Final = ("kind", "title", "proof", "responses")
_SAMPLE_KEYS: Final = ("method", "count", "seed")
_RANGE_KEYS: Final = ("from", "to", "count", "step", "spacing")
_OTHER_NAMES: Final = {
    # pairs of the command line, and other names: what stands for them in a plan
    "box": "box_width and box_length",
    "annulus": "annulus_inner and annulus_outer",
    "frequency_range": "lowest_frequency and highest_frequency",
    "d50": "particle_diameter",
    "liquid": "name",
    "material": "name",
}
_MOST_CASES: Final = 10**9
_MOST_DRAWS: Final = 2**24


def read_plan(path: str | Path) -> Plan:
    """Return the plan of a TOML file.

    Raises
    ------
    InputError
        The file cannot be read, or the plan has faults: all of them are named.
    """
    try:
        text = Path(path).read_text(encoding="utf-8-sig")
    except (OSError, UnicodeDecodeError) as error:
        reason = error.strerror if isinstance(error, OSError) else "it is not UTF-8 text"
        raise InputError(f"plan: {str(path)!r} cannot be read: {reason}") from error
    try:
        given = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise InputError(f"plan: {str(path)!r} is not TOML: {error}") from error
    return plan_from(given, bare_numbers=False)


def plan_from(given: Mapping[str, Any], *, bare_numbers: bool = True) -> Plan:
    """Return the plan that a mapping describes.

    Parameters
    ----------
    given : mapping
        Tables ``study``, ``fixed``, ``vary``, ``together``, ``uncertain``, ``sample``; see the contributor's guide.
    bare_numbers : bool
        Whether plain numbers count as SI.

    Raises
    ------
    InputError
        The plan has faults: all of them are named.

    Examples
    --------
    >>> plan = plan_from({
    ...     "fixed": {"name": "glycerol", "cylinder": "70 mm", "depth": "30 mm"},
    ...     "vary": {"frequency": ["40 Hz", "50 Hz"], "acceleration": {"from": "10 g_n", "to": "50 g_n", "count": 5}},
    ... })
    >>> plan.cases, plan.question
    (10, 'operating point')
    """
    return _Reader(given, bare_numbers).plan()


class _Reader:
    """Reads one plan and collects its faults."""

    def __init__(self, given: Mapping[str, Any], bare_numbers: bool) -> None:
        self.given = given
        self.bare_numbers = bare_numbers
        self.faults: list[str] = []

    def plan(self) -> Plan:
        for key in self.given:
            if key not in _TABLES:
                self.faults.append(f"{key}: not a table of a plan; expected {', '.join(_TABLES)}")
        study = self._table("study", _STUDY_KEYS)
        subject = study.get("kind", "liquid")
        if subject not in ("liquid", "grains"):
            self.faults.append(f"kind: {subject!r} is not allowed; expected 'liquid' or 'grains'")
            subject = "liquid"
        self.subject, self.known = subject, inputs_of(subject)
        fixed = {
            name: value
            for name, raw in self._table("fixed").items()
            if (value := self._value(name, raw)) is not None
        }
        axes = [axis for name, raw in self._table("vary").items() if (axis := self._axis(name, raw)) is not None]
        axes += self._together()
        uncertain = self._uncertain()
        method, count, seed = self._sample(bool(uncertain))
        self._refuse_doubles(fixed, axes, uncertain)
        axes.sort(key=lambda axis: axis.depth_of_loop)  # stable: axes of one cost stay in the order of the plan
        plan = Plan(
            subject=subject, title=self._text(study, "title"), fixed=fixed, axes=tuple(axes), uncertain=uncertain,
            method=method, count=count, seed=seed, proof=self._flag(study, "proof"),
        )  # fmt: skip
        self.faults += faults_of_sense(plan, self._names_given())
        responses = self._responses(study, plan.question)
        if subject == "grains" and plan.proof is not None:
            self.faults.append("proof: a bed has no count of growing modes to prove; leave it out")
        if plan.cases > _MOST_CASES:
            self.faults.append(f"plan: {plan.cases} cases are too many; at most {_MOST_CASES}")
        if self.faults:
            found = "1 fault" if len(self.faults) == 1 else f"{len(self.faults)} faults"
            raise InputError("\n".join([f"plan: {found}", *self.faults]))
        return Plan(
            subject=subject, title=plan.title, fixed=fixed, axes=plan.axes, uncertain=uncertain, method=method, count=count,
            seed=seed, proof=plan.proof, responses=responses,
        )  # fmt: skip

    def _table(self, name: str, allowed: Sequence[str] = ()) -> dict[str, Any]:
        table = self.given.get(name, {})
        if not isinstance(table, Mapping):
            self.faults.append(f"{name}: expected a table, [{name}]")
            return {}
        for key in table if allowed else ():
            if key not in allowed:
                self.faults.append(f"{name}: {str(key)[:40]!r} is not known; expected {', '.join(allowed)}")
        return dict(table)

    def _text(self, table: Mapping[str, Any], key: str) -> str:
        value = table.get(key, "")
        if not isinstance(value, str):
            self.faults.append(f"{key}: expected text")
            return ""
        return value

    def _flag(self, table: Mapping[str, Any], key: str) -> bool | None:
        value = table.get(key)
        if value is None or isinstance(value, bool):
            return value
        self.faults.append(f"{key}: {str(value)[:40]!r} is not allowed; expected true or false")
        return None

    def _known(self, name: str) -> bool:
        if name in self.known:
            return True
        hint = _OTHER_NAMES.get(name) or " or ".join(difflib.get_close_matches(str(name), self.known, 3, 0.5))
        self.faults.append(f"{str(name)[:40]!r} is not an input of {self.subject}{f'; expected {hint}' if hint else ''}")
        return False

    def _tried(self, read: Callable[..., Any], *arguments: Any, **options: Any) -> Any:
        """Return what is read, or note the fault and return None."""
        try:
            return read(*arguments, **options)
        except InputError as error:
            self.faults.append(str(error))
            return None

    def _value(self, name: str, raw: Any) -> Any:
        if not self._known(name):
            return None
        return self._tried(input_value, name, raw, bare_numbers=self.bare_numbers)

    def _axis(self, name: str, raw: Any) -> Axis | None:
        if not self._known(name):
            return None
        if isinstance(raw, Mapping):
            values = self._tried(self._range, name, raw)
        elif isinstance(raw, list | tuple | np.ndarray):
            values = self._list(name, raw)
        else:
            self.faults.append(f"{name}: under [vary] expected a list, or a table with from, to and count")
            return None
        if values is None:
            return None
        if not len(values):
            self.faults.append(f"{name}: the list is empty; expected at least one value")
            return None
        return Axis({name: tuple(values)})

    def _list(self, name: str, raw: Any) -> list[Any] | None:
        before = len(self.faults)
        items = raw.tolist() if isinstance(raw, np.ndarray) else list(raw)
        values = [self._tried(input_value, name, item, bare_numbers=self.bare_numbers) for item in items]
        return values if len(self.faults) == before else None

    def _range(self, name: str, raw: Mapping[str, Any]) -> list[float]:
        if not self.known[name].numeric:
            raise InputError(f"{name}: has no range; expected a list")
        unknown = [key for key in raw if key not in _RANGE_KEYS]
        if unknown or "from" not in raw or "to" not in raw or ("count" in raw) == ("step" in raw):
            said = f"{', '.join(map(str, unknown))} not known; " if unknown else ""
            raise InputError(f"{name}: {said}a range takes from, to, either count or step, and optionally spacing")
        low, high = (input_value(name, raw[end], bare_numbers=self.bare_numbers) for end in ("from", "to"))
        spacing = raw.get("spacing", "linear")
        if spacing not in ("linear", "geometric"):
            raise InputError(f"{name}: spacing {str(spacing)[:40]!r} is not allowed; expected 'linear' or 'geometric'")
        if not low < high:
            raise InputError(f"{name}: the range from {low:g} to {high:g} (SI) is empty; from must be the smaller")
        if spacing == "geometric" and not low > 0.0:
            raise InputError(f"{name}: a geometric range must start above 0")
        if "step" in raw:
            if spacing == "geometric" or self.known[name].kind == "temperature" and not str(raw["step"]).endswith("K"):
                raise InputError(f"{name}: a step goes with linear spacing; that of a temperature is in kelvin, such as 2K")
            step = float(input_value(name, raw["step"], bare_numbers=self.bare_numbers))
            count = math.floor((high - low) / step * (1.0 + 1e-12)) + 1 if step > 0.0 else 0
            if not 1 <= count <= _MOST_CASES:
                raise InputError(f"{name}: step {str(raw['step'])[:40]!r} does not fit the range")
            return (low + step * np.arange(count)).tolist()  # type: ignore[no-any-return]
        count = raw["count"]
        if isinstance(count, bool) or not isinstance(count, int) or not 2 <= count <= _MOST_DRAWS:
            raise InputError(f"{name}: count {str(count)[:40]!r} is not allowed; expected a whole number, at least 2")
        points = np.geomspace(low, high, count) if spacing == "geometric" else np.linspace(low, high, count)
        return points.tolist()  # type: ignore[no-any-return]

    def _together(self) -> list[Axis]:
        tables = self.given.get("together", [])
        if isinstance(tables, Mapping):
            tables = [tables]
        if not isinstance(tables, list | tuple) or not all(isinstance(table, Mapping) for table in tables):
            self.faults.append("together: expected tables, [[together]], of lists of one length")
            return []
        axes = []
        for table in tables:
            columns = {}
            for name, raw in table.items():
                if not self._known(name):
                    continue
                if not isinstance(raw, list | tuple | np.ndarray):
                    self.faults.append(f"{name}: under [[together]] expected a list")
                elif (values := self._list(name, raw)) is not None:
                    columns[name] = tuple(values)
            lengths = {len(values) for values in columns.values()}
            if len(lengths) > 1:
                self.faults.append(f"together: {', '.join(columns)} are not of one length")
            elif lengths == {0}:
                self.faults.append("together: the lists are empty")
            elif columns:
                axes.append(Axis(columns))
        return axes

    def _uncertain(self) -> dict[str, Distribution]:
        drawn = {}
        for name, raw in self._table("uncertain").items():
            if not self._known(name):
                continue
            if not self.known[name].numeric:
                self.faults.append(f"{name}: is a word and cannot be uncertain; vary it over a list")
                continue
            found = self._tried(distribution, name, raw, bare_numbers=self.bare_numbers)
            if found is not None:
                drawn[name] = found
        return drawn

    def _sample(self, any_uncertain: bool) -> tuple[str, int, int]:
        asked = bool(self._table("uncertain"))
        sample = self._table("sample", _SAMPLE_KEYS)
        if not asked:
            if sample:
                self.faults.append("sample: given without [uncertain]; nothing is to be drawn")
            return "", 0, 1
        method, count, seed = sample.get("method", "latin hypercube"), sample.get("count"), sample.get("seed", 1)
        if method not in METHODS:
            self.faults.append(f"method: {str(method)[:40]!r} is not known; expected one of {', '.join(METHODS)}")
            method = "random"
        if isinstance(count, bool) or not isinstance(count, int) or not 1 <= count <= _MOST_DRAWS:
            self.faults.append(f"count: {str(count)[:40]!r} under [sample] is not allowed; expected 1 to {_MOST_DRAWS}")
            count = 1
        elif method in ("sobol", "sensitivity") and count & (count - 1):
            self.faults.append(f"count: {count} is no power of 2, which {method} draws need; take {1 << count.bit_length()}")
        if isinstance(seed, bool) or not isinstance(seed, int) or not 0 <= seed < 2**63:
            self.faults.append(f"seed: {str(seed)[:40]!r} is not allowed; expected a whole number, at least 0")
            seed = 1
        return str(method) if any_uncertain else "", count, seed

    def _refuse_doubles(
        self, fixed: Mapping[str, Any], axes: Sequence[Axis], uncertain: Mapping[str, Distribution]
    ) -> None:
        seen: set[str] = set()
        for name in (*fixed, *(name for axis in axes for name in axis.values), *uncertain):
            if name in seen:
                self.faults.append(f"{name}: given more than once; expected under one of fixed, vary, together, uncertain")
            seen.add(name)

    def _names_given(self) -> frozenset[str]:
        """Return all names that the plan mentions, whether their values could be read or not."""
        names: set[str] = set()
        for table in (self.given.get(key) for key in ("fixed", "vary", "uncertain")):
            names.update(table if isinstance(table, Mapping) else ())
        tables = self.given.get("together", [])
        for table in [tables] if isinstance(tables, Mapping) else tables if isinstance(tables, list | tuple) else []:
            names.update(table if isinstance(table, Mapping) else ())
        return frozenset(names & set(self.known))

    def _responses(self, study: Mapping[str, Any], question: str) -> tuple[str, ...]:
        known = RESPONSES[question]
        asked = study.get("responses")
        if asked is None:
            return tuple(key for key in known if key != COSTLY_RESPONSE)
        if not isinstance(asked, list | tuple) or not all(key in known for key in asked):
            self.faults.append(f"responses: expected a list of {', '.join(known)}")
            return known
        needed = {"verdict", "proven"} & set(known)
        return tuple(key for key in known if key in asked or key in needed)
