"""Numbers, ranges and places as the reports write them, from a check's plain data."""

from __future__ import annotations

from typing import Any


def number(value: Any) -> str:
    """A measured value as it is shown: text as it is, numbers to six digits."""
    return f"{value:.6g}" if isinstance(value, float) else str(value)


def expected(value: Any) -> str:
    """What was expected: a value, or a range, whose open end is left out."""
    if not isinstance(value, dict):
        return number(value)
    low, high = value["from"], value["to"]
    if low is None:
        return f"at most {number(high)}"
    if high is None:
        return f"at least {number(low)}"
    return f"{number(low)} to {number(high)}"


def measure(finding: dict[str, Any]) -> str:
    """``measured 33.2, expected 0 to 0.5 degrees``."""
    parts = []
    if finding["measured"] is not None:
        parts.append(f"measured {number(finding['measured'])}")
    if finding["expected"] is not None:
        parts.append(f"expected {expected(finding['expected'])}")
    unit = f" {finding['unit']}" if finding["unit"] else ""
    return ", ".join(parts) + unit


def frames(text: str) -> str:
    """``frames 1001-1048`` or ``frame 1001``."""
    return f"frame{'s' if '-' in text or ',' in text else ''} {text}"


def frames_words(finding: dict[str, Any]) -> str:
    """``frames 1001-1048, worst 1020``."""
    text, worst = finding["frames"], finding["worst_frame"]
    if not text:
        return ""
    words = frames(text)
    return f"{words}, worst {worst}" if words.startswith("frames") and worst is not None else words


def pixel(place: list[float] | None, in_frame: bool = True) -> str:
    """``640, 102``, with what to know of it."""
    if place is None:
        return "behind the camera"
    return f"{place[0]:.0f}, {place[1]:.0f}" + ("" if in_frame else " (outside the frame)")


def bow_words(bow: dict[str, Any]) -> str:
    """Where one expected bow stands, in one line without its name."""
    if bow["why_not"]:
        return str(bow["why_not"])
    parts = [f"top {pixel(bow['top'], bow['top_in_frame'])}"]
    for side in ("left", "right"):
        if bow[side]:
            parts.append(f"{side} {pixel(bow[side]['pixel'])} (at the {bow[side]['ends_at']})")
    return "; ".join(parts) + f"; {bow['arc']:.0f}° of its circle in view"


def antisolar_words(frame: dict[str, Any]) -> str:
    """Where the antisolar point is in one frame."""
    point = frame["antisolar_point"]
    place = pixel(point["pixel"], point["in_frame"])
    return f"{place}; elevation {point['elevation']:.1f}°, azimuth {point['azimuth']:.1f}°"


def same_place(a: dict[str, Any], b: dict[str, Any]) -> bool:
    """Whether two frames' expected bows read the same."""
    return {**a, "frame": 0} == {**b, "frame": 0}


def stretches(frames: list[dict[str, Any]]) -> list[tuple[dict[str, Any], int]]:
    """Frames' expected bows with equal neighbours joined: (the first's, the last frame's number)."""
    joined: list[tuple[dict[str, Any], int]] = []
    for frame in frames:
        if joined and same_place(joined[-1][0], frame):
            joined[-1] = (joined[-1][0], frame["frame"])
        else:
            joined.append((frame, frame["frame"]))
    return joined


def few(joined: list[tuple[dict[str, Any], int]], most: int) -> tuple[list[tuple[dict[str, Any], int]], int]:
    """At most so many of the stretches, spread evenly with the first and the last; and how many are left out."""
    if len(joined) <= most:
        return joined, 0
    picked = [joined[round(k * (len(joined) - 1) / (most - 1))] for k in range(most)]
    return picked, len(joined) - most


def verdict(data: dict[str, Any]) -> str:
    """The check in one line."""
    counts = data["counts"]
    parts = [f"{count} {key.replace('_', ' ')}" for key, count in counts.items() if count]
    return ("flagged: " if data["flagged"] else "nothing flagged: ") + (", ".join(parts) or "no findings")


def override_words(values: dict[str, Any]) -> list[str]:
    """The values of a fix that are keys of the shot file, as they are typed after --override."""
    return [f"{key}={_typed(value)}" for key, value in values.items() if "." in key]


def _typed(value: Any) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{key} = {_typed(item)}" for key, item in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(_typed(item) for item in value) + "]"
    return number(value)
