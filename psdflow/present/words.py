"""The verdict in words, first thing on every page."""

from psdflow.assessment import Assessment, Row
from psdflow.present.numerals import digits, friendly, span_of

GROUP_MEANS = {
    "C": "cohesive: tends to lift as a plug and channel rather than fluidize",
    "A": "aeratable: expands smoothly above u_mf, bubbles from u_mb, deaerates slowly",
    "B": "sand-like: bubbles from u_mf on, collapses as soon as the gas stops",
    "D": "coarse: large slow bubbles, high gas demand; may be spouted",
}


def verdict(assessment: Assessment, lot: int = 0) -> list[str]:
    """Two or three sentences: does it fluidize and how, cohesion, what is lost."""
    rows = {row.key: row for row in assessment.rows(lot)}
    return [line for line in (_fluidizes(rows), _cohesion(rows), _carryover(rows)) if line]


def _fluidizes(rows: dict[str, Row]) -> str:
    velocity, u_mf, regime = rows["u_operating"], rows["u_mf"], rows["regime"]
    if velocity.value is None or u_mf.value is None:
        return ""
    ratio = float(velocity.value) / float(u_mf.value)
    state = f"{regime.value} at {digits(float(velocity.value))} m/s ({digits(ratio, 2)} × u_mf)"
    group = rows.get("group")
    if group is None or group.value is None:
        return f"In this liquid: {state}."
    share = rows[f"probability_{str(group.value).lower()}"].value
    sure = f" ({float(share or 0) * 100:.0f} % of draws and boundary sets)"
    state = f"If it fluidizes at all: {state}" if group.value == "C" else f"{state[0].upper()}{state[1:]}"
    meant = _in_this_duty(str(group.value), rows)
    return f"Group {group.value}{sure}, {GROUP_MEANS[str(group.value)]}. {state}{meant}."


def _in_this_duty(group: str, rows: dict[str, Row]) -> str:
    """What the group means at this duty's velocity, as the end of the sentence."""

    def value(key: str) -> float | None:
        row = rows.get(key)
        return None if row is None or row.value is None else float(row.value)

    velocity, u_mb, bubble = value("u_operating") or 0.0, value("u_mb"), value("bubble_diameter")
    if group == "C":
        return "; expect channels, plugs and a pressure drop below the bed's weight whatever the velocity"
    if velocity < (value("u_mf") or 0.0):
        return f"; it needs {digits(value('u_mf'), 2)} m/s to move"
    if group == "A" and u_mb is not None and velocity <= u_mb:
        return f"; below u_mb ({digits(u_mb, 2)} m/s), so it expands without bubbles"
    size = f", about {digits(bubble, 2)} m at the surface" if bubble is not None else ""
    if group == "A":
        return f"; past its bubble-free window, which ends at {digits(u_mb, 2)} m/s; bubbles stay limited{size}"
    return f"; bubbles grow with height{size}"


def _cohesion(rows: dict[str, Row]) -> str:
    risk = rows.get("cohesion_risk")
    if risk is None or risk.value is None:
        return ""
    probability = float(rows["cohesion_probability"].value or 0)
    advice = {
        "low": "no sign that it will cake.",
        "elevated": "test it before it goes into the bed.",
        "high": "hold it: likely to channel and cake.",
    }[str(risk.value)]
    return f"Cohesion risk {risk.value} (probability {probability * 100:.0f} %, {risk.note}): {advice}"


def _carryover(rows: dict[str, Row]) -> str:
    loss, rate = rows.get("loss_rate"), rows.get("carryover_rate")
    said = []
    for name, row in (("Carryover", rate), ("loss past the cyclones", loss)):
        if row is not None and row.value is not None:
            unit = friendly(row.key, row.unit)
            span = span_of(row.low, row.high, unit)
            said.append(f"{name} {digits(float(row.value) * unit.factor)} {unit.unit}" + (f" ({span})" if span else ""))
    return "; ".join(said) + " with the lot as received in the bed." if said else ""


def short_verdict(assessment: Assessment, lot: int = 0) -> str:
    """One phrase for an overview: fluidizes, test, hold, carried out or fixed."""
    at = assessment.index(lot)
    risk = str(assessment["cohesion_risk"][at]) if "cohesion_risk" in assessment else ""
    regime = str(assessment["regime"][at])
    if risk == "high":
        return "hold: cohesive"
    if regime == "fixed bed":
        return "does not fluidize at this velocity"
    if risk == "elevated":
        return "test: cohesion open"
    if regime in {"fast fluidization or transport", "hydraulic transport"}:
        return "carried out"
    return "fluidizes"
