"""The answer document, field by field: the OpenAPI document shows it, tests hold answers to it."""

from typing import Any

from marshmallow import Schema, fields, validate

VERDICTS = ("stable", "marginal", "unstable", "ill_posed")
CAUSES = ("open_loop", "origin", "crossing", "infinity")

_EXACT = 'A fraction "p/q", "sqrt(p/q)" or "-sqrt(p/q)"'


def _text(description: str, **options: Any) -> fields.String:
    return fields.String(required=True, metadata={"description": description}, **options)


def _count(description: str, **options: Any) -> fields.Integer:
    return fields.Integer(
        required=True,
        strict=True,
        validate=validate.Range(min=0),
        metadata={"description": description},
        **options,
    )


def _number(description: str, **options: Any) -> fields.Float:
    return fields.Float(required=True, metadata={"description": description}, **options)


def _list(inner: fields.Field[Any], description: str, **options: Any) -> fields.List[Any]:
    return fields.List(inner, required=True, metadata={"description": description}, **options)


def _object(schema: type[Schema], description: str, **options: Any) -> fields.Nested:
    return fields.Nested(schema, required=True, metadata={"description": description}, **options)


def _objects(schema: type[Schema], description: str) -> fields.List[Any]:
    return _list(fields.Nested(schema), description)


def _not_yet(what: str) -> fields.Raw:
    return fields.Raw(
        required=True,
        allow_none=True,
        validate=validate.Equal(None),
        metadata={"description": f"{what}; null in this version."},
    )


class AnswerPart(Schema):
    """A part of an answer: it holds all of its fields and no others."""


class LoopSchema(AnswerPart):
    """The loop as understood."""

    name = _text("The name sent, or null.", allow_none=True)
    numerator = _list(
        fields.String(), 'Multiplied out, descending powers of s, exact ("5/2"), leading zeros stripped.'
    )
    denominator = _list(fields.String(), "The same of the denominator.")
    relative_degree = fields.Integer(
        required=True,
        strict=True,
        allow_none=True,
        metadata={
            "description": "Degree of the denominator less that of the numerator; null for a zero numerator."
        },
    )
    feedback = _text(
        "negative: 1 + K L = 0; positive: 1 - K L = 0.", validate=validate.OneOf(["negative", "positive"])
    )
    detour = _text(
        "Side on which the contour passes poles on the imaginary axis.",
        validate=validate.OneOf(["right", "left"]),
    )
    sample_time_s = _not_yet("Sampling period in s")
    dead_time_s = _text("Dead time in s, exact; 0 in this version.")


class FrequencySchema(AnswerPart):
    """A frequency on the imaginary axis; all of it null at infinity."""

    rad_per_s = _number("In rad/s, at least 0; null at infinity.", allow_none=True)
    hz = _number("In Hz; null at infinity.", allow_none=True)
    exact = _text(f"{_EXACT} in rad/s; null where it is none of these.", allow_none=True)


class AxisPoleSchema(AnswerPart):
    """An open-loop pole on the imaginary axis, of the denominator as sent; not at 0, with its conjugate."""

    rad_per_s = _number("Its frequency in rad/s, at least 0.")
    hz = _number("Its frequency in Hz.")
    exact = _text(f"{_EXACT} in rad/s; null where it is none of these.", allow_none=True)
    multiplicity = _count("How many poles coincide there.")


class HiddenModeSchema(AnswerPart):
    """Roots that numerator and denominator share: no gain moves them, every count contains them."""

    polynomial = _list(fields.String(), "Monic and squarefree, descending powers of s, exact.")
    rhp_roots = _count("Of them, in the open right half plane.")
    axis_roots = _count("Of them, on the imaginary axis.")


class OpenLoopSchema(AnswerPart):
    """What the loop is before it is closed."""

    rhp_poles = _count("Poles in the open right half plane, with multiplicity, nothing cancelled.")
    enclosed_poles = _count("P as the contour counts it: with the detour on the left, axis poles of L too.")
    axis_poles = _objects(AxisPoleSchema, "One entry for each frequency at least 0, ascending.")
    hidden_modes = _objects(HiddenModeSchema, "One entry for each multiplicity of shared roots.")


class EdgeSchema(AnswerPart):
    """A gain at which the count can change."""

    gain = _number("The double nearest to it.")
    decimal = _text("Its decimal, 30 significant digits.")
    exact = _text(f"{_EXACT}; null where it is none of these.", allow_none=True)
    causes = _list(
        fields.String(validate=validate.OneOf(CAUSES)),
        "open_loop: the gain zero; origin: a root passes through s = 0; crossing: a pair crosses or touches "
        "the imaginary axis; infinity: the closed-loop polynomial loses degree.",
    )
    counts_equal = fields.Boolean(
        required=True,
        metadata={"description": "Both counts are the same on both sides, though not at the edge itself."},
    )
    frequencies = _objects(FrequencySchema, "Where on the axis roots lie at this gain, ascending.")


class BandSchema(AnswerPart):
    """An open interval of gains in which nothing changes."""

    lower = _number("Its lower end; null: unbounded.", allow_none=True)
    upper = _number("Its upper end; null: unbounded.", allow_none=True)
    verdict = _text(
        "stable: no root right of the axis or on it; marginal: none right of it, some on it, all simple; "
        "unstable: the rest.",
        validate=validate.OneOf(VERDICTS[:3]),
    )
    rhp_poles = _count("Z, closed-loop poles in the open right half plane, with multiplicity.")
    axis_poles = _count("Closed-loop poles on the imaginary axis throughout the band.")
    clockwise_encirclements = fields.Integer(
        required=True,
        strict=True,
        allow_none=True,
        metadata={
            "description": "N in Z = P + N, counted from the curve, clockwise positive; null where -1/K lies "
            "on the curve throughout the band."
        },
    )


class ClosedLoopPoleSchema(AnswerPart):
    """A closed-loop pole at the commissioned gain."""

    re = _number("Real part in rad/s.")
    im = _number("Imaginary part in rad/s.")
    multiplicity = _count("How many poles coincide there.")
    damping_ratio = _number("-re over the magnitude; null at the origin.", allow_none=True)
    time_constant_s = _number("-1/re in s, negative where it grows; null on the axis.", allow_none=True)


class NearestStableSchema(AnswerPart):
    """The stable band nearest to the commissioned gain, by the ratio, on its own side of zero."""

    band = _count("Its index in bands.")
    ratio_from = _number("Its end nearer to zero, over the gain; null: unbounded.", allow_none=True)
    ratio_to = _number("Its end farther from zero, over the gain; null: unbounded.", allow_none=True)


class CommissionedSchema(AnswerPart):
    """The gain in service."""

    gain = _number("The double nearest to it.")
    exact = _text('The gain itself, "p/q".')
    band = _count("Index of the band it lies in; null precisely at an edge.", allow_none=True)
    verdict = _text(
        "As of a band; ill_posed where 1 + K L(infinity) = 0, an algebraic loop.",
        validate=validate.OneOf(VERDICTS),
    )
    rhp_poles = _count(
        "Closed-loop poles right of the axis; null where the polynomial vanishes.", allow_none=True
    )
    axis_poles = _count("Closed-loop poles on the axis; null where the polynomial vanishes.", allow_none=True)
    closed_loop_poles = _objects(
        ClosedLoopPoleSchema, "By descending real part, then descending imaginary part."
    )
    nearest_stable = _object(
        NearestStableSchema, "null where stable, and where that side of zero has none.", allow_none=True
    )
    margins = _not_yet("Margins at this gain")


class EdgeEvidenceSchema(AnswerPart):
    """Rational intervals that isolate an edge and its frequencies."""

    gain_between = _list(
        fields.String(),
        "The gain, [low, high], exact; equal ends: the gain itself.",
        validate=validate.Length(2, 2),
    )
    omega_squared_between = _list(
        fields.List(fields.String(), allow_none=True, validate=validate.Length(2, 2)),
        "For each frequency its square in (rad/s)^2, [low, high], exact; null at infinity.",
    )
    gain_polynomial = _list(
        fields.String(),
        "Integers, descending powers of K: a polynomial with exactly one root in gain_between; null where "
        "none is needed.",
        allow_none=True,
    )


class BandEvidenceSchema(AnswerPart):
    """A gain at which a band's counts can be made again."""

    sample_gain = _text("A gain inside the band, exact; null for a band without width.", allow_none=True)


class EvidenceSchema(AnswerPart):
    """What a third party needs to re-derive the verdicts with rational arithmetic alone."""

    edges = _objects(EdgeEvidenceSchema, "In the order of edges.")
    bands = _objects(BandEvidenceSchema, "In the order of bands.")


class CautionSchema(AnswerPart):
    """Something this loop makes worth saying."""

    code = _text("For programs; stable.")
    text = _text("For people.")


class AnswerSchema(AnswerPart):
    """Over which gains the loop is stable, and where the commissioned gain stands."""

    loop = _object(LoopSchema, "The loop as understood.")
    open_loop = _object(OpenLoopSchema, "What the loop is before it is closed.")
    edges = _objects(EdgeSchema, "Ascending.")
    bands = _objects(
        BandSchema,
        "One more than edges; band i lies between edge i-1 and edge i, or ends at the gain window.",
    )
    commissioned = _object(
        CommissionedSchema, "The gain in service; null where none was sent.", allow_none=True
    )
    curve = _not_yet("The curve of L(jw)")
    root_paths = _not_yet("Where the closed-loop poles go")
    step_response = _not_yet("The response to a unit step")
    acceptance = _not_yet("The acceptance requirements' outcome")
    evidence = _object(EvidenceSchema, "On request, else null.", allow_none=True)
    summary = _text("The answer in plain sentences.")
    cautions = _objects(
        CautionSchema, "What this loop makes worth saying; the general caution is always there."
    )
    question_digest = _text(
        "Over the exact question: two ways of writing one question have one digest.",
        validate=validate.Regexp(r"^sha256:[0-9a-f]{64}$"),
    )
    engine = _text("Which engine answered.")
