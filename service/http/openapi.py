"""The OpenAPI document (3.1), generated from the schemas that read questions and describe answers."""

from typing import Any, Final

from apispec import APISpec
from apispec.ext.marshmallow import MarshmallowPlugin
from marshmallow import Schema

from schemas.answer import AnswerSchema
from schemas.limits import LimitedSchema, LimitListSchema
from schemas.probe import ProbeSchema
from schemas.problem import ProblemSchema
from schemas.question import QuestionSchema
from service.http.field_shapes import EXACT_NUMBER, own_field_shape
from service.http.limits import limit_list
from service.http.operations import DESCRIPTION, TITLE, paths
from service.settings import Limits
from service.version import VERSION

_POLYNOMIALS: Final = ["numerator", "denominator"]
_ROOTS: Final = ["zeros", "poles", "factor"]


def _any_of(names: list[str]) -> dict[str, Any]:
    return {"anyOf": [{"required": [name]} for name in names]}


# The two forms exclude each other; a schema of fields alone cannot say so.
_QUESTION_FORMS: Final = [
    {"required": _POLYNOMIALS, "not": {"required": ["blocks"]}},
    {"required": ["blocks"], "not": _any_of(_POLYNOMIALS)},
]
_BLOCK_FORMS: Final = [
    {"required": _POLYNOMIALS, "not": _any_of(_ROOTS)},
    {**_any_of(_ROOTS), "not": _any_of(_POLYNOMIALS)},
]


class _Naming:
    """Names components after their schemas' classes, and remembers which class each is of."""

    def __init__(self) -> None:
        self.classes: dict[str, type[Schema]] = {}

    def __call__(self, schema: type[Schema] | Schema) -> str:
        kind = schema if isinstance(schema, type) else type(schema)
        name = kind.__name__.removesuffix("Schema")
        self.classes[name] = kind
        return name


def openapi_document(limits: Limits) -> dict[str, Any]:
    """Build the document of a service under ``limits``; a function of these and the code alone."""
    naming = _Naming()
    plugin = MarshmallowPlugin(schema_name_resolver=naming)
    spec = APISpec(
        title=TITLE,
        version=VERSION,
        openapi_version="3.1.0",
        info={"description": DESCRIPTION, "license": {"name": "Apache-2.0", "identifier": "Apache-2.0"}},
        plugins=[plugin],
    )
    if plugin.converter is None:
        raise TypeError("the plugin has a converter once the document has it")
    plugin.converter.add_attribute_function(own_field_shape)  # type: ignore[no-untyped-call]
    spec.components.schema("ExactNumber", EXACT_NUMBER)
    for name, schema in (
        ("Question", QuestionSchema(limits.question)),
        ("Answer", AnswerSchema()),
        ("Problem", ProblemSchema()),
        ("LimitList", LimitListSchema()),
        ("Probe", ProbeSchema()),
    ):
        naming(schema)
        spec.components.schema(name, schema=schema)
    for address, operations in paths().items():
        spec.path(path=address, operations=operations)
    document: dict[str, Any] = spec.to_dict()
    _complete(document["components"]["schemas"], naming.classes)
    document["x-limits"] = limit_list(limits)["limits"]
    return document


def _complete(components: dict[str, dict[str, Any]], classes: dict[str, type[Schema]]) -> None:
    for name, kind in classes.items():
        components[name]["description"] = (kind.__doc__ or "").strip()
        if not issubclass(kind, LimitedSchema):
            # What the service sends may gain members within /v1; what it is sent may not hold unknown ones.
            components[name].pop("additionalProperties", None)
    components["Question"]["oneOf"] = _QUESTION_FORMS
    components["Block"]["oneOf"] = _BLOCK_FORMS
