"""The published JSON Schemas: one for each kind of file, made from the one model that defines it."""

import json
from pathlib import Path
from typing import Literal

from pydantic import BaseModel

from advisor.counsel.comparison import Comparison
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit

SchemaName = Literal["visit", "range", "comparison"]

MODELS: dict[SchemaName, type[BaseModel]] = {"visit": Visit, "range": Range, "comparison": Comparison}


def schema_text(name: SchemaName) -> str:
    """Return the JSON Schema of one kind of file as it is published."""
    schema = MODELS[name].model_json_schema(by_alias=True)
    content = {"$schema": "https://json-schema.org/draft/2020-12/schema", **schema}
    return json.dumps(content, ensure_ascii=False, indent=1, sort_keys=True) + "\n"


def schema_path(name: SchemaName) -> Path:
    """Return where the published copy lies."""
    return Path(__file__).with_name(f"{name}.schema.json")


def write_schemas() -> None:
    """Write the published copies anew after a change of a model."""
    for name in MODELS:
        schema_path(name).write_text(schema_text(name), encoding="utf-8")
