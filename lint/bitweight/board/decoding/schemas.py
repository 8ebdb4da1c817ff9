"""The JSON schema of the board file, from the same fields that read it."""

import json
from collections.abc import Mapping

from bitweight.board.decoding.boards import TABLES
from bitweight.board.decoding.channels import ChannelFields
from bitweight.board.decoding.definitions import Definitions
from bitweight.board.decoding.fields import (
    BoardFields,
    ConstantFields,
    ConverterFields,
    DeviationFields,
    ReferenceFields,
    SupplyFields,
    TargetFields,
)
from bitweight.board.decoding.shapes import table_schema
from bitweight.board.decoding.tables import Field, Schema

_SINGLE: Mapping[str, tuple[Field[object], ...]] = {
    "board": BoardFields.ALL,
    "target": TargetFields.ALL,
}
_NAMED: Mapping[str, tuple[Field[object], ...]] = {
    "supply": SupplyFields.ALL,
    "reference": ReferenceFields.ALL,
    "converter": ConverterFields.ALL,
    "channel": ChannelFields.ALL,
}


def board_schema() -> Schema:
    """The schema (JSON schema 2020-12) that every board file without mistakes fits."""
    tables = _tables(required=True)
    variant = {
        "type": "object",
        "properties": {
            "define": {"description": "macros of this assembly", **Definitions().schema()},
            **_tables(required=False),
        },
        "additionalProperties": False,
    }
    tables["variant"] = {"type": "object", "additionalProperties": variant}
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "bitweight board file",
        "description": "The hardware facts that converter scaling in firmware must agree with",
        "type": "object",
        "properties": {name: tables[name] for name in TABLES},
        "additionalProperties": False,
        "required": ["channel"],
    }


def schema_text() -> str:
    """The schema as it is published."""
    return json.dumps(board_schema(), indent=2, ensure_ascii=False) + "\n"


def _tables(*, required: bool) -> Schema:
    """Every table but the variants; a variant's tables need not be whole."""
    tables: Schema = {
        name: table_schema(fields, required=required) for name, fields in _SINGLE.items()
    }
    for name, fields in _NAMED.items():
        inner = table_schema(fields, required=required)
        tables[name] = {"type": "object", "additionalProperties": inner}
    constant = {"anyOf": [{"type": "string"}, table_schema(ConstantFields.ALL)]}
    tables["constants"] = {"type": "object", "additionalProperties": constant}
    tables["deviation"] = {"type": "array", "items": table_schema(DeviationFields.ALL)}
    return tables
