"""The published JSON schema of the board file."""

import json
from importlib.resources import files
from pathlib import Path

import jsonschema
import pytest
import tomli

from bitweight.board.decoding.boards import TABLES
from bitweight.board.decoding.schemas import board_schema, schema_text
from board.mistaken import mistakes_of
from board.samples import HATCHERY, SMALLEST


def test_the_published_schema_is_the_generated_one() -> None:
    """The file in the package is what the fields make."""
    published = (files("bitweight.board") / "board.schema.json").read_text(encoding="utf-8")
    assert published == schema_text()


def test_the_schema_is_one() -> None:
    """It is a valid schema of its own draft and names every table."""
    schema = board_schema()
    jsonschema.Draft202012Validator.check_schema(schema)
    properties = schema["properties"]
    assert isinstance(properties, dict)
    assert tuple(properties) == TABLES


@pytest.mark.parametrize("text", [HATCHERY, SMALLEST], ids=["all tables", "smallest"])
def test_right_board_files_fit_the_schema(text: str) -> None:
    """What the program reads, an editor accepts."""
    data = json.loads(json.dumps(tomli.loads(text), default=str))
    jsonschema.validate(data, board_schema())


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("bits = 8", "bits = 0"),
        ("bits = 8", "bist = 8"),
        ('coding = "unsigned"', 'coding = "signed"'),
        ('kind = "shunt"', 'kind = "shunts"'),
        ('kind = "shunt"', 'kind = "divider"'),
        ("[target]", "[targets]"),
        ('voltage = "3.3 V 2%"', "voltage = 3.3"),
    ],
)
def test_wrong_board_files_do_not_fit(old: str, new: str) -> None:
    """An editor marks what the program would refuse."""
    assert old in HATCHERY
    data = json.loads(json.dumps(tomli.loads(HATCHERY.replace(old, new, 1)), default=str))
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(data, board_schema())


def test_the_corpus_fits_the_schema() -> None:
    """Every board file of the corpus without mistakes is accepted by the published schema."""
    validator = jsonschema.Draft202012Validator(board_schema())
    corpus = Path(__file__).parents[3] / "corpus"
    texts = [path.read_text(encoding="utf-8") for path in sorted(corpus.glob("*/*/board.toml"))]
    right = [text for text in texts if not mistakes_of(text)]
    assert right
    for text in right:
        validator.validate(json.loads(json.dumps(tomli.loads(text), default=str)))
