"""The answer in plain sentences: the stable gains, what happens at their ends, the gain in service."""

from collections.abc import Iterator, Sequence

from service.analysis.answer import Band, Commissioned, Edge, OpenLoop, Verdict
from service.analysis.bands import verdict_of
from service.analysis.phrases import counted, edge_text, gain_text, listed, manner
from service.analysis.survey import Survey


def summarise(
    survey: Survey,
    open_loop: OpenLoop,
    edges: Sequence[Edge],
    bands: Sequence[Band],
    commissioned: Commissioned | None,
) -> str:
    """Summarise an answer whose parts are already written."""
    where = "" if survey.window is None else " in the window"
    return " ".join(
        [
            *_hidden(open_loop),
            *_stable(survey, edges, bands, where),
            *_ends(edges, bands),
            *_in_service(edges, bands, commissioned),
            *_way_back(survey, commissioned, where),
        ]
    )


def _hidden(open_loop: OpenLoop) -> Iterator[str]:
    right = sum(mode.rhp_roots for mode in open_loop.hidden_modes)
    if right:
        yield (
            f"Numerator and denominator share {counted(right, 'root')} right of the imaginary axis: "
            "no gain moves a hidden mode."
        )


def _stable(survey: Survey, edges: Sequence[Edge], bands: Sequence[Band], where: str) -> Iterator[str]:
    stable = [_range(edges, bands, i) for i in _with_verdict(survey, "stable")]
    yield f"Stable for {listed(stable)}." if stable else f"No gain{where} is stable."
    marginal = [_range(edges, bands, i) for i in _with_verdict(survey, "marginal")]
    if marginal:
        yield f"Marginal, with poles that stay on the imaginary axis, for {listed(marginal)}."


def _with_verdict(survey: Survey, verdict: Verdict) -> list[int]:
    """Return the bands of a verdict that hold a gain."""
    return [
        i
        for i, (band, span) in enumerate(zip(survey.bands, survey.spans, strict=True))
        if verdict_of(band.counts) == verdict and not span.empty
    ]


def _range(edges: Sequence[Edge], bands: Sequence[Band], i: int) -> str:
    lower = edge_text(edges[i - 1]) if i > 0 else _outer(bands[i].lower)
    upper = edge_text(edges[i]) if i < len(edges) else _outer(bands[i].upper)
    if lower is None:
        return "every K" if upper is None else f"K < {upper}"
    return f"K > {lower}" if upper is None else f"{lower} < K < {upper}"


def _outer(end: float | None) -> str | None:
    return None if end is None else gain_text(end, None)


def _ends(edges: Sequence[Edge], bands: Sequence[Band]) -> Iterator[str]:
    """Say what happens at each edge next to a stable band, in ascending order."""
    for i, edge in enumerate(edges):
        below, above = bands[i], bands[i + 1]
        if below.verdict == "stable" == above.verdict:
            yield _touched(edge)
        elif above.verdict == "stable":
            yield _left(f"Below {edge_text(edge)}", edge, below)
        elif below.verdict == "stable":
            yield _left(f"Above {edge_text(edge)}", edge, above)


def _touched(edge: Edge) -> str:
    if "infinity" in edge.causes:
        return f"At K = {edge_text(edge)} exactly the loop is ill-posed, though both sides are stable."
    return (
        f"At K = {edge_text(edge)} exactly poles lie on the imaginary axis, {manner(edge.frequencies)}, "
        "though both sides are stable."
    )


def _left(where: str, edge: Edge, beyond: Band) -> str:
    if beyond.rhp_poles == 0:
        return f"{where} {counted(beyond.axis_poles, 'pole')} stay on the imaginary axis."
    verb = "goes" if beyond.rhp_poles == 1 else "go"
    return f"{where} {counted(beyond.rhp_poles, 'pole')} {verb} unstable, {manner(edge.frequencies)}."


def _in_service(
    edges: Sequence[Edge], bands: Sequence[Band], commissioned: Commissioned | None
) -> Iterator[str]:
    if commissioned is None:
        return
    gain = gain_text(commissioned.gain, commissioned.exact)
    if commissioned.verdict == "ill_posed":
        yield f"The gain in service, K = {gain}, is ill-posed: 1 + K L vanishes at infinite frequency."
    elif commissioned.band is None:
        yield f"The gain in service, K = {gain}, lies exactly on an edge: {_state(commissioned)}."
    else:
        inside = _range(edges, bands, commissioned.band)
        place = "" if inside == "every K" else f" ({inside})"
        yield f"The gain in service, K = {gain}, is {_state(commissioned)}{place}."


def _state(commissioned: Commissioned) -> str:
    right, axis = commissioned.rhp_poles or 0, commissioned.axis_poles or 0
    if commissioned.verdict == "stable":
        return "stable"
    parts = []
    if right:
        parts.append(f"{counted(right, 'pole')} right of the axis")
    if axis:
        parts.append(f"{counted(axis, 'pole')} on it" if right else f"{counted(axis, 'pole')} on the axis")
    repeated = ", repeated ones among them" if commissioned.verdict == "unstable" and not right else ""
    return f"{commissioned.verdict}, with {listed(parts)}{repeated}"


def _way_back(survey: Survey, commissioned: Commissioned | None, where: str) -> Iterator[str]:
    """Say how far it is to a stable band, from a gain that is in none."""
    if commissioned is None or commissioned.verdict == "stable":
        return
    nearest = commissioned.nearest_stable
    if nearest is not None:
        low, high = nearest.ratio_from, nearest.ratio_to
        if low is None or low < 0:
            factor = f"a factor below {high:.4g}"
        elif high is None:
            factor = f"a factor above {low:.4g}"
        else:
            factor = f"a factor between {low:.4g} and {high:.4g}"
        yield f"The nearest stable band lies {factor} away."
    elif commissioned.gain != 0 and _with_verdict(survey, "stable"):
        yield f"No gain of its sign{where} is stable."
