"""How a record states its fields: the one place that says what each may hold, for checks, tables and CSV columns."""

from __future__ import annotations

import dataclasses
import math
import unicodedata
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime, timezone
from typing import Any, Literal, TypeVar, dataclass_transform

from fleet.errors import RecordError

FieldKind = Literal[
    "text", "code", "number", "whole", "hours", "money", "choice", "reference", "moment", "flag", "daytime"
]
_METADATA = "wearbook"

EARLIEST = datetime(1990, 1, 1, tzinfo=UTC)
LATEST = datetime(2150, 1, 1, tzinfo=UTC)
LONGEST_TEXT = 2000
LONGEST_CODE = 60
_UNWRITABLE = ("Cc", "Cs")  # control characters, and lone halves of characters that UTF-8 cannot write


@dataclass(frozen=True)
class FieldSpec:
    """What one field of a record may hold.

    `low` and `high` bound numbers (inclusive); `column` is the name in a CSV file; `meaning` teaches the reader.
    """

    kind: FieldKind
    meaning: str
    optional: bool
    low: float | None = None
    high: float | None = None
    choices: tuple[str, ...] = ()
    refers_to: str = ""
    column: str = ""


def _spec(spec: FieldSpec, default: Any) -> Any:
    if default is dataclasses.MISSING:
        return dataclasses.field(metadata={_METADATA: spec})
    return dataclasses.field(default=default, metadata={_METADATA: spec})


def text(meaning: str, *, default: Any = dataclasses.MISSING) -> Any:
    """Free text of at most 2000 characters."""
    return _spec(FieldSpec("text", meaning, default is None), default)


def short(meaning: str, *, default: Any = dataclasses.MISSING) -> Any:
    """A short label that people write on bags and robots."""
    return _spec(FieldSpec("code", meaning, default is None), default)


def number(meaning: str, low: float, high: float, *, default: Any = dataclasses.MISSING) -> Any:
    """A finite number within inclusive bounds."""
    return _spec(FieldSpec("number", meaning, default is None, low=low, high=high), default)


def whole(meaning: str, low: int, high: int, *, default: Any = dataclasses.MISSING) -> Any:
    """A whole number within inclusive bounds."""
    return _spec(FieldSpec("whole", meaning, default is None, low=low, high=high), default)


def hours(meaning: str, *, column: str, high: float = 10_000, default: Any = dataclasses.MISSING) -> Any:
    """A duration kept as whole seconds and written as hours."""
    return _spec(FieldSpec("hours", meaning, default is None, low=0, high=high * 3600, column=column), default)


def money(meaning: str, *, column: str, default: Any = dataclasses.MISSING) -> Any:
    """An amount kept as whole cents and written with a decimal point."""
    return _spec(FieldSpec("money", meaning, default is None, low=0, high=1e11, column=column), default)


def choice(meaning: str, choices: Sequence[str], *, default: Any = dataclasses.MISSING) -> Any:
    """One of a few words."""
    return _spec(FieldSpec("choice", meaning, default is None, choices=tuple(choices)), default)


def reference(kind: str, meaning: str, *, default: Any = dataclasses.MISSING) -> Any:
    """The record_id of a record of another kind."""
    return _spec(FieldSpec("reference", meaning, default is None, refers_to=kind), default)


def moment(meaning: str, *, default: Any = dataclasses.MISSING) -> Any:
    """A time with its offset from UTC."""
    return _spec(FieldSpec("moment", meaning, default is None), default)


def daytime(meaning: str, *, column: str) -> Any:
    """A time of day, kept as minutes after midnight and written as HH:MM."""
    return _spec(FieldSpec("daytime", meaning, False, low=0, high=24 * 60, column=column), dataclasses.MISSING)


def flag(meaning: str, *, default: bool) -> Any:
    """Yes or no."""
    return _spec(FieldSpec("flag", meaning, False), default)


_R = TypeVar("_R")


@dataclass_transform(
    frozen_default=True,
    kw_only_default=True,
    field_specifiers=(text, short, number, whole, hours, money, choice, reference, moment, flag, daytime),
)
def record(kind: str) -> Callable[[type[_R]], type[_R]]:
    """Make a frozen, self-checking record class of this kind."""

    def decorate(cls: type[_R]) -> type[_R]:
        cls.kind = kind  # type: ignore[attr-defined]
        return dataclass(frozen=True, kw_only=True)(cls)

    return decorate


def fields_of(cls: type) -> Mapping[str, FieldSpec]:
    """Field name -> what it may hold, in the order of declaration."""
    found = _FIELDS.get(cls)
    if found is None:
        found = {f.name: f.metadata[_METADATA] for f in dataclasses.fields(cls) if _METADATA in f.metadata}
        _FIELDS[cls] = found
    return found


_FIELDS: dict[type, Mapping[str, FieldSpec]] = {}


def column_of(name: str, spec: FieldSpec) -> str:
    """The CSV column in which a field is written."""
    return spec.column or name


def field_problem(spec: FieldSpec, value: Any) -> str | None:
    """What is wrong with a value for this field, or None."""
    if value is None:
        return None if spec.optional else "is missing"
    return _CHECKS[spec.kind](spec, value)


def _text_problem(spec: FieldSpec, value: Any) -> str | None:
    if not isinstance(value, str):
        return f"is {value!r}, not a text"
    longest = LONGEST_CODE if spec.kind == "code" else LONGEST_TEXT
    if len(value) > longest:
        return f"is longer than {longest} characters"
    if spec.kind == "code" and not value.strip():
        return "is empty"
    if any(unicodedata.category(letter) in _UNWRITABLE and letter not in "\n\t" for letter in value):
        return "holds a control character"
    return None


def _number_problem(spec: FieldSpec, value: Any) -> str | None:
    if isinstance(value, bool) or not isinstance(value, int | float):
        return f"is {value!r}, not a number"
    if not math.isfinite(value):
        return f"is {value}, not a finite number"
    if spec.kind in ("whole", "hours", "money", "daytime") and value != int(value):
        return f"is {value}, not a whole number"
    scale = {"hours": 3600.0, "money": 100.0}.get(spec.kind, 1.0)
    if spec.low is not None and value < spec.low:
        return f"is {value / scale:g}, below {spec.low / scale:g}"
    if spec.high is not None and value > spec.high:
        return f"is {value / scale:g}, above {spec.high / scale:g}"
    return None


def _choice_problem(spec: FieldSpec, value: Any) -> str | None:
    return None if value in spec.choices else f"is {value!r}; it may be: {', '.join(spec.choices)}"


def _reference_problem(_: FieldSpec, value: Any) -> str | None:
    return None if isinstance(value, str) and value else f"is {value!r}, not the id of a record"


def _moment_problem(_: FieldSpec, value: Any) -> str | None:
    if not isinstance(value, datetime) or value.tzinfo is None:
        return f"is {value!r}, not a time with a zone"
    if not EARLIEST <= value <= LATEST:
        return f"is {value.isoformat()}, outside the years 1990 to 2150"
    return None


def with_plain_offset(moment: datetime) -> datetime:
    """The same moment with its offset as a plain number of hours: clocks of a zone subtract wrongly where they jump."""
    offset = moment.utcoffset()
    if offset is None or isinstance(moment.tzinfo, timezone):
        return moment
    return moment.astimezone(timezone(offset))


def _flag_problem(_: FieldSpec, value: Any) -> str | None:
    return None if isinstance(value, bool) else f"is {value!r}, not yes or no"


_CHECKS: dict[FieldKind, Callable[[FieldSpec, Any], str | None]] = {
    "text": _text_problem,
    "code": _text_problem,
    "number": _number_problem,
    "whole": _number_problem,
    "hours": _number_problem,
    "money": _number_problem,
    "choice": _choice_problem,
    "reference": _reference_problem,
    "moment": _moment_problem,
    "flag": _flag_problem,
    "daytime": _number_problem,
}


@dataclass(frozen=True)
class Stamp:
    """When, by whom and in which write a version of a record was entered."""

    version: int
    write_number: int
    entered_at: datetime
    entered_by: str
    entered_at_claimed: bool = False
    reason: str | None = None
    withdrawn: bool = False


@dataclass(frozen=True, kw_only=True)
class Record:
    """What all records share: a stable random id and, once written, a stamp."""

    record_id: str
    stamp: Stamp | None = None

    def __post_init__(self) -> None:
        fields = fields_of(type(self))
        problems = [
            f"{column_of(name, spec)} {problem}"
            for name, spec in fields.items()
            if (problem := field_problem(spec, getattr(self, name))) is not None
        ]
        if not problems:
            for name, spec in fields.items():
                if spec.kind == "moment" and getattr(self, name) is not None:
                    object.__setattr__(self, name, with_plain_offset(getattr(self, name)))
            problems = self.contradictions()
        if problems:
            raise RecordError(f"{kind_of(type(self)).replace('_', ' ')}: {'; '.join(problems)}.")

    def contradictions(self) -> list[str]:
        """Problems between the fields of this one record; none unless a kind says so."""
        return []


def kind_of(cls: type) -> str:
    """The kind of a record class, as used in tables and file names."""
    return str(cls.kind)  # type: ignore[attr-defined]
