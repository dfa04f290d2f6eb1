"""The JSON Schema of a shot file, which editors read for completion and checking; made from the one schema."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

FILE = Path(__file__).with_name("shot.schema.json")

UNUSED = ("title", "default", "x-example", "x-default")  # noise in an editor; the reference page has them


def json_schema() -> dict[str, Any]:
    """The schema as JSON Schema draft 2020-12."""
    from renderer.shot.schema.shot_file import ShotFile

    found: dict[str, Any] = _cleaned(ShotFile.model_json_schema(by_alias=True))
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "Shot file of antisolar"} | found


def _cleaned(schema: Any, names: bool = False) -> Any:
    """Without what an editor has no use for; `names` where the keys of a dict are a user's keys and no keywords."""
    if isinstance(schema, list):
        return [_cleaned(value) for value in schema]
    if not isinstance(schema, dict):
        return schema
    kept = {name: value for name, value in schema.items() if names or name not in UNUSED}
    if not names and "anyOf" in kept:  # "null" stands for a key that is left out, which TOML cannot write
        some = [choice for choice in kept["anyOf"] if choice != {"type": "null"}]
        kept = {name: value for name, value in kept.items() if name != "anyOf"} | (
            some[0] if len(some) == 1 else {"anyOf": some}
        )
    inner = ("properties", "patternProperties", "$defs")
    return {
        name: value if name == "examples" else _cleaned(value, not names and name in inner)
        for name, value in kept.items()
    }


def schema_text() -> str:
    """The schema as it is shipped."""
    return json.dumps(json_schema(), indent=1, ensure_ascii=False) + "\n"


def main() -> None:
    """Write the shipped file afresh."""
    FILE.write_text(schema_text(), encoding="utf-8")


if __name__ == "__main__":
    main()
