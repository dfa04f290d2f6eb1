"""The base of every table of the shot file: one pass that finds everything wrong with it."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from dataclasses import dataclass
from typing import Any, ClassVar, Self, cast, get_origin

from pydantic import BaseModel, ConfigDict, Field, ValidationError, ValidatorFunctionWrapHandler, model_validator
from pydantic.fields import FieldInfo
from pydantic_core import PydanticCustomError

from renderer.shot.schema.flaws import Flaw, Path, below, clean, listed, nearest, refusal
from renderer.shot.schema.leaves import Leaf

MOST_STRANGE = 50  # unknown keys of one table that are named
UNIT_ENDINGS = ("_mm", "_cm", "_m", "_km", "_ft", "_in", "_nm", "_deg", "_degrees", "_k", "_c", "_s")


_remembered: ContextVar[dict[tuple[type, int], tuple[Any, Table]] | None] = ContextVar("remembered", default=None)


@contextmanager
def remembering() -> Iterator[None]:
    """While this lasts, the same table of a file is read once, however many variants hold it.

    A table is known by its identity; it is held on to, so that no other can take its address.
    """
    token = _remembered.set({})
    try:
        yield
    finally:
        _remembered.reset(token)


@dataclass(frozen=True)
class OneOf:
    """Keys of a table that exclude each other, in groups that belong together; `needed`: one of them must be there."""

    groups: tuple[tuple[str, ...], ...]
    needed: bool = True

    def flaws(self, given: set[str]) -> Iterator[Flaw]:
        """What is wrong with the keys that are `given`."""
        met = [group for group in self.groups if given.intersection(group)]
        if len(met) > 1:
            first, second = (next(key for key in group if key in given) for group in met[:2])
            yield Flaw((second,), f"`{first}` and `{second}` exclude each other", f"only one of {self.text('and')}")
        if not met and self.needed:
            names = self.text("or")
            yield Flaw((), f"{names}{',' if ', or ' in names else ''} is missing", "exactly one of them")

    def json(self) -> dict[str, Any]:
        """The rule as JSON Schema."""
        some = [
            {"required": list(group)} if len(group) == 1 else {"anyOf": [{"required": [key]} for key in group]}
            for group in self.groups
        ]
        none = [] if self.needed else [{"not": {"anyOf": some}}]
        return {"oneOf": [*some, *none]}

    def text(self, last: str) -> str:
        """The alternatives in a sentence."""
        words = [[f"`{key}`" for key in group] for group in self.groups]
        names = [(" with " if len(group) == 2 else "/").join(group) for group in words]
        plain = listed(names, last)
        return plain if all(len(group) == 1 for group in words) else plain.replace(f" {last} ", f", {last} ")

    def excluded_by(self, key: str) -> set[str]:
        """The keys that cannot stand beside `key`."""
        return {other for group in self.groups for other in group if key not in group} if self._has(key) else set()

    def _has(self, key: str) -> bool:
        return any(key in group for group in self.groups)


def key(default: Any, meaning: str, example: str, default_text: str = "", alias: str | None = None) -> Any:
    """A field of a table: its default (``...`` where it must be given), meaning, an example in TOML, and, where the
    default needs words, those."""
    import tomllib

    try:
        shown = [tomllib.loads(f"example = {example}")["example"]]
    except tomllib.TOMLDecodeError as error:
        raise ValueError(f"{example!r} is not a value of TOML") from error
    extra = {"x-example": example} | ({"x-default": default_text} if default_text else {})
    return Field(default, description=meaning, examples=shown, json_schema_extra=cast(Any, extra), alias=alias)


def leaf_of(info: FieldInfo) -> Leaf | None:
    """The leaf in a field's annotation, or None where the field is a table or holds tables."""
    return next((item for item in info.metadata if isinstance(item, Leaf)), None)


class Table(BaseModel):
    """A table of the shot file. Subclasses state their keys, and what rules there are between them.

    `ONE_OF`: keys that exclude each other. `LATER`: keys that are known but not supported yet. `SHORT`: the JSON Schema
    of what may be written in place of the table, see `shorthand`. `NOUN`: what is expected, in messages.
    """

    model_config = ConfigDict(extra="forbid", frozen=True)

    ONE_OF: ClassVar[tuple[OneOf, ...]] = ()
    LATER: ClassVar[tuple[str, ...]] = ()
    NOUN: ClassVar[str] = "a table"
    SHORT: ClassVar[dict[str, Any] | None] = None

    @classmethod
    def shorthand(cls, value: Any) -> Any:
        """The table that `value` stands for, or `value` itself."""
        return value

    @classmethod
    def rules(cls, given: dict[str, Any]) -> Iterator[Flaw]:
        """Rules between the keys as written; asked even where single values are wrong."""
        return iter(())

    def agree(self) -> Iterator[Flaw]:
        """Rules between values; asked only where each value is right by itself, even if `rules` found something."""
        return iter(())

    @classmethod
    def keys(cls) -> dict[str, FieldInfo]:
        """The table's keys as written in a shot file."""
        return {info.alias or name: info for name, info in cls.model_fields.items()}

    @classmethod
    def __get_pydantic_json_schema__(cls, schema: Any, handler: Any) -> dict[str, Any]:
        found: dict[str, Any] = handler(schema)
        whole = handler.resolve_ref_schema(found)
        rules = [alternatives.json() for alternatives in cls.ONE_OF]
        if rules:
            whole["allOf"] = rules
        return found if cls.SHORT is None else {"anyOf": [cls.SHORT, found]}

    @classmethod
    def is_list(cls, name: str) -> bool:
        """Whether a key holds a list of tables."""
        info = cls.keys().get(name)
        return info is not None and get_origin(info.annotation) is list

    @model_validator(mode="wrap")
    @classmethod
    def _read(cls, value: Any, handler: ValidatorFunctionWrapHandler) -> Self:
        if isinstance(value, cls):
            return value
        remembered = _remembered.get()
        if remembered is not None and (cls, id(value)) in remembered:
            return remembered[cls, id(value)][1]  # type: ignore[return-value]
        table = cls.shorthand(value)
        if not isinstance(table, dict):
            raise _custom([refusal(value, cls.NOUN)])
        model = cls._checked(table, handler)
        if remembered is not None:
            remembered[cls, id(value)] = (value, model)
        return model

    @classmethod
    def _checked(cls, table: dict[str, Any], handler: ValidatorFunctionWrapHandler) -> Self:
        """The table read, or everything that is wrong with it."""
        known = cls.keys()
        names = [name for name in table if name not in known]
        strange = {name: cls._unknown(name, known) for name in names[:MOST_STRANGE]}
        if len(names) > MOST_STRANGE:
            more = Flaw((names[MOST_STRANGE],), f"and {len(names) - MOST_STRANGE:,} more keys are not known", "")
            strange[names[MOST_STRANGE]] = more
        given = {name: entry for name, entry in table.items() if name in known}
        meant = {flaw.nearest: table[name] for name, flaw in strange.items() if flaw.nearest} | given
        later = any(name in cls.LATER for name in strange)
        flaws = [*strange.values()]
        for alternatives in cls.ONE_OF:  # what is meant, or comes later, is not said to be missing as well
            flaws += (flaw for flaw in alternatives.flaws(set(meant)) if flaw.at or not later)
        flaws += cls.rules(meant)
        try:
            model: Self = handler(given)
        except ValidationError as error:
            raise _custom(flaws + _flaws_of(error, cls, set(meant))) from None
        flaws += model.agree()
        if flaws:
            raise _custom(flaws)
        return model

    @classmethod
    def _unknown(cls, name: str, known: dict[str, FieldInfo]) -> Flaw:
        """The flaw of a key that is not known, or not supported yet."""
        if name in cls.LATER:
            return Flaw((name,), f"`{name}` is not supported yet", "")
        for ending in UNIT_ENDINGS:
            stem = name.removesuffix(ending)
            if stem != name and stem in known:
                leaf = leaf_of(known[stem])
                return Flaw((name,), f"no key is named `{clean(name)}`", leaf.expects() if leaf else "", stem)
        near = nearest(name, known)
        return Flaw((name,), f"no key is named `{clean(name)}`", "" if near else f"one of {', '.join(known)}", near)


def _custom(flaws: list[Flaw]) -> PydanticCustomError:
    return PydanticCustomError("flaws", "see the flaws", {"flaws": tuple(flaws)})


def _flaws_of(error: ValidationError, table: type[Table], meant: set[str]) -> list[Flaw]:
    """Every flaw that pydantic collected below `table`; what is `meant` is not missing."""
    found: list[Flaw] = []
    for item in error.errors(include_url=False, include_input=True):
        at: Path = item["loc"]
        if item["type"] == "flaws":
            found += below(at, item["ctx"]["flaws"])
        elif item["type"] == "missing":
            found += [] if at[-1] in meant else [_missing(str(at[-1]), table)]
        elif item["type"] in ("list_type", "dict_type"):
            expected = "a list of tables" if item["type"] == "list_type" else "a table of tables"
            found.append(refusal(item["input"], expected, at))
        elif item["type"] == "too_long":
            limit = item["ctx"]["max_length"]
            found.append(
                Flaw(at, f"`{{key}}` has {item['ctx']['actual_length']:,} entries", f"at most {limit:,} entries")
            )
        else:  # a kind of error that no table of ours can give: our own fault, not the user's
            raise error
    return found


def _missing(name: str, table: type[Table]) -> Flaw:
    """The flaw of a key that must be given."""
    info = table.keys()[name]
    leaf = leaf_of(info)
    extra = info.json_schema_extra if isinstance(info.json_schema_extra, dict) else {}
    return Flaw((), f"`{name}` is missing", leaf.expects() if leaf else f"a table, as in {name} = {extra['x-example']}")


def find(errors: ValidationError) -> list[Flaw]:
    """The flaws of a whole shot file."""
    found: list[Flaw] = []
    for item in errors.errors(include_url=False, include_input=False):
        found += below(item["loc"], item["ctx"]["flaws"])
    return found
