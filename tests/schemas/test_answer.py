"""The answer's documentation names what the analysis gives, and nothing else."""

from dataclasses import fields
from typing import Any

import pytest
from marshmallow import Schema

from schemas import answer as documented
from service.analysis.answer import (
    Answer,
    AxisPole,
    Band,
    BandEvidence,
    Caution,
    ClosedLoopPole,
    Commissioned,
    Edge,
    EdgeEvidence,
    Evidence,
    Frequency,
    HiddenMode,
    Loop,
    NearestStable,
    OpenLoop,
)

SENT_ALONG = {"name", "sample_time_s", "dead_time_s"}
AROUND = {"curve", "root_paths", "step_response", "acceptance", "question_digest", "engine"}

PAIRS: list[tuple[type[Schema], Any, set[str]]] = [
    (documented.LoopSchema, Loop, SENT_ALONG),
    (documented.FrequencySchema, Frequency, set()),
    (documented.AxisPoleSchema, AxisPole, set()),
    (documented.HiddenModeSchema, HiddenMode, set()),
    (documented.OpenLoopSchema, OpenLoop, set()),
    (documented.EdgeSchema, Edge, set()),
    (documented.BandSchema, Band, set()),
    (documented.ClosedLoopPoleSchema, ClosedLoopPole, set()),
    (documented.NearestStableSchema, NearestStable, set()),
    (documented.CommissionedSchema, Commissioned, set()),
    (documented.EdgeEvidenceSchema, EdgeEvidence, set()),
    (documented.BandEvidenceSchema, BandEvidence, set()),
    (documented.EvidenceSchema, Evidence, set()),
    (documented.CautionSchema, Caution, set()),
    (documented.AnswerSchema, Answer, AROUND),
]


@pytest.mark.parametrize(
    ("schema", "part", "besides"), PAIRS, ids=lambda value: getattr(value, "__name__", "")
)
def test_a_schema_names_the_fields_of_its_part(schema: type[Schema], part: Any, besides: set[str]) -> None:
    assert set(schema().fields) == {field.name for field in fields(part)} | besides


def test_every_schema_of_the_module_is_held_to_a_part() -> None:
    schemas = {
        each
        for each in vars(documented).values()
        if isinstance(each, type)
        and issubclass(each, documented.AnswerPart)
        and each is not documented.AnswerPart
    }
    assert schemas == {schema for schema, _, _ in PAIRS}


@pytest.mark.parametrize("schema", [schema for schema, _, _ in PAIRS], ids=lambda each: each.__name__)
def test_every_field_is_required_and_says_what_it_is(schema: type[Schema]) -> None:
    assert schema.__doc__
    for field in schema().fields.values():
        assert field.required
        assert field.metadata.get("description")
