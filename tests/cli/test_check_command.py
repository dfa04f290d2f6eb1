"""antisolar check: exit codes, forms of the report, and fixes that work as overrides."""

from __future__ import annotations

import json
import re
import time
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest
from command_line import SHOT, antisolar, write_shot

FINDING_KEYS = {
    "rule", "title", "severity", "subject", "frames", "worst_frame", "measured", "expected", "unit", "why", "source",
    "fix", "signed_off",
}  # fmt: skip


def json_of(*arguments: object, code: int) -> dict[str, Any]:
    run = antisolar("check", *arguments, "--json", "-", "--quiet")
    assert run.returncode == code, run.stderr
    assert run.stderr == ""
    report: dict[str, Any] = json.loads(run.stdout)
    return report


def test_a_right_bow_passes_and_a_wrong_one_is_flagged(tmp_path: Path) -> None:
    shot = write_shot(tmp_path)
    assert json_of(shot, code=0)["flagged"] is False
    wrong = json_of(shot, "--variant", "wrong", code=1)
    assert wrong["flagged"] is True
    assert {"bow.centre", "bow.sun-behind"} <= {finding["rule"] for finding in wrong["findings"]}


def test_the_report_has_its_shape(tmp_path: Path) -> None:
    report = json_of(write_shot(tmp_path), "--variant", "wrong", code=1)
    assert set(report) == {
        "format", "antisolar", "shot", "title", "variant", "frames", "pixels", "fail_on", "flagged", "counts",
        "findings", "expected_bows",
    }  # fmt: skip
    assert (report["variant"], report["frames"], report["pixels"]) == ("wrong", "1001-1003", [64, 36])
    for finding in report["findings"]:
        assert set(finding) == FINDING_KEYS
        assert finding["severity"] in ("impossible", "implausible", "advice")
        assert finding["why"]
        assert finding["source"]
        assert set(finding["fix"]) == {"text", "values", "instead"}
    assert [frame["frame"] for frame in report["expected_bows"]] == [1001, 1002, 1003]
    assert [bow["order"] for bow in report["expected_bows"][0]["bows"]] == [1, 2]


def as_override(key: str, value: object) -> str:
    if isinstance(value, dict):
        value = "{" + ", ".join(f"{name} = {entry}" for name, entry in value.items()) + "}"
    return f"{key}={value}"


def keys_of(values: dict[str, Any]) -> list[str]:
    """The values of a fix that are keys of the shot file, as arguments."""
    return [part for key, value in values.items() if "." in key for part in ("--override", as_override(key, value))]


WRONG = {
    "bow.centre": ["bows_to_check[0].centre={azimuth = 5.0, elevation = -29.0}"],
    "bow.radius": ["bows_to_check[0].radius=38.0"],
    "bow.width": ["bows_to_check[0].width=3.0"],
    "bow.colour-order": ["bows_to_check[0].outer_colour=violet"],
    "bow.sun-height": ["sun.elevation=50", "bows_to_check[0].centre={azimuth = 0.0, elevation = -50.0}"],
    "material.index": ["objects[0].material=odd", "materials.odd.refractive_index={abbe = [0.7, 60.0]}"],
    "material.dispersion": ["objects[0].material=odd", "materials.odd.refractive_index={constant = 1.5}"],
}


@pytest.mark.parametrize("rule", list(WRONG))
def test_the_keys_of_a_fix_work_as_they_stand(rule: str, tmp_path: Path) -> None:
    """Whatever the report says to override is overridden, word for word, and the finding is gone: both ways, if two."""
    shot = write_shot(tmp_path)
    broken = [part for change in WRONG[rule] for part in ("--override", change)]
    report = json_of(shot, *broken, code=1)
    (found,) = [finding for finding in report["findings"] if finding["rule"] == rule]
    ways = [way for way in (keys_of(found["fix"]["values"]), keys_of(found["fix"]["instead"])) if way]
    assert ways
    for way in ways:
        run = antisolar("check", shot, *broken, *way, "--json", "-", "--quiet")
        assert rule not in {finding["rule"] for finding in json.loads(run.stdout)["findings"]}, way


def test_fail_on_and_the_shots_own_line(tmp_path: Path) -> None:
    shot = write_shot(tmp_path)
    wide = ["--override", "bows_to_check[0].radius=40.0"]
    json_of(shot, *wide, code=1)
    assert json_of(shot, *wide, "--fail-on", "impossible", code=0)["fail_on"] == "impossible"
    json_of(shot, *wide, "--override", "checks.fail_on=impossible", code=0)
    json_of(shot, *wide, "--override", "checks.fail_on=impossible", "--fail-on", "implausible", code=1)


def test_sign_offs_are_shown_and_do_not_fail(tmp_path: Path) -> None:
    signed = SHOT + '\n[checks]\nsign_off = [{ rule = "bow.*", why = "the director likes it" }]\n'
    run = antisolar("check", write_shot(tmp_path, signed), "--variant", "wrong")
    assert run.returncode == 0
    assert "[signed off] Bow centre: comp bow" in run.stdout
    assert "the director likes it" in run.stdout
    unsigned = SHOT + '\n[checks]\nsign_off = [{ rule = "bow.*", why = "long ago", until = "2020-01-01" }]\n'
    run = antisolar("check", write_shot(tmp_path, unsigned), "--variant", "wrong")
    assert run.returncode == 1
    assert "Sign-off has run out" in run.stdout


def test_text_says_where_the_bows_stand_unasked(tmp_path: Path) -> None:
    run = antisolar("check", write_shot(tmp_path))
    assert re.search(r"antisolar point  \d+, \d+", run.stdout)
    assert re.search(
        r"primary bow +top \d+, \d+; left \d+, \d+ \(at the horizon\); right \d+, \d+ \(at the horizon\)", run.stdout
    )
    assert run.stdout.endswith("nothing flagged: no findings\n")
    assert "checking 3 frames" in run.stderr


def test_frames_can_be_chosen_and_no_sun_says_so(tmp_path: Path) -> None:
    shot = write_shot(tmp_path)
    assert json_of(shot, "--frames", "1-9x4", code=0)["frames"] == "1-9x4"
    run = antisolar("check", shot, "--frames", "9-1")
    assert (run.returncode, run.stderr.splitlines()[-2][:12]) == (2, "  where:    ")


def test_plain_text_has_no_colour_codes(tmp_path: Path) -> None:
    for setting in ({}, {"NO_COLOR": "1"}, {"FORCE_COLOR": "0"}):
        assert "\x1b" not in antisolar("check", write_shot(tmp_path), "--variant", "wrong", **setting).stdout


class Links(HTMLParser):
    """What a page would fetch."""

    def __init__(self) -> None:
        super().__init__()
        self.fetched: list[str] = []
        self.pictures = 0

    def handle_starttag(self, tag: str, attributes: list[tuple[str, str | None]]) -> None:
        for name, value in attributes:
            if name in ("src", "href") and value:
                self.pictures += value.startswith("data:image/png;base64,")
                if not value.startswith("data:"):
                    self.fetched.append(value)


def test_the_page_and_the_overlay_are_written_and_fetch_nothing(tmp_path: Path) -> None:
    from PIL import Image

    shot = write_shot(tmp_path)
    page, overlay = tmp_path / "out" / "report.html", tmp_path / "out" / "bows.png"
    run = antisolar(
        "check", shot, "--variant", "wrong", "--report", page, "--overlay", overlay, "--override", "title='A & B <c>'"
    )
    assert run.returncode == 1, run.stderr
    with Image.open(overlay) as picture:
        assert picture.width == 1440
    text = page.read_text(encoding="utf-8")
    links = Links()
    links.feed(text)
    assert (links.fetched, links.pictures) == ([], 1)
    assert "url(" not in text
    assert "A &amp; B &lt;c&gt;" in text
    assert "Bow centre: comp bow" in text
    assert str(overlay) in run.stderr
    with_picture = antisolar("check", shot, "--report", page, "--picture", overlay)
    assert with_picture.returncode == 0, with_picture.stderr
    again = Links()
    again.feed(page.read_text(encoding="utf-8"))
    assert again.pictures == 2


def test_a_picture_that_is_none_is_bad_input(tmp_path: Path) -> None:
    shot = write_shot(tmp_path)
    for option in ("--report", "--overlay"):
        run = antisolar("check", shot, option, tmp_path / "x.out", "--picture", shot, "--quiet")
        assert run.returncode == 2
        assert run.stderr.startswith("error: ")
        assert "Traceback" not in run.stderr


def test_json_goes_to_a_file_beside_the_text(tmp_path: Path) -> None:
    run = antisolar("check", write_shot(tmp_path), "--json", tmp_path / "found.json")
    assert json.loads((tmp_path / "found.json").read_text(encoding="utf-8"))["flagged"] is False
    assert "nothing flagged" in run.stdout


def test_a_log_of_json_lines(tmp_path: Path) -> None:
    run = antisolar("check", write_shot(tmp_path), "--log", "json")
    (line,) = [json.loads(line) for line in run.stderr.splitlines()]
    assert (line["event"], line["frames"]) == ("check", 3)


MOVING = """\
format = 1
[frames]
range = "1001-2000"
[camera]
position = { 1001 = [0.0, 1.7, 0.0], 2000 = [60.0, 1.7, 0.0] }
target = { 1001 = [0.0, 3.0, -10.0], 2000 = [60.0, 3.0, -12.0] }
focal_length = 18.0
pixels = [1280, 720]
[sun]
elevation = { 1001 = 14.0, 2000 = 34.0 }
azimuth = { 1001 = 180.0, 2000 = 200.0 }
[sky]
kind = "clear"
[[objects]]
name = "tank"
shape = { tank = { size = [0.3, 0.2, 0.2], wall = 0.01, fill = 0.8, filling = "water" } }
material = "soda-lime glass"
[[bows_to_check]]
name = "right"
centre = { azimuth = { 1001 = 0.0, 2000 = 20.0 }, elevation = { 1001 = -14.0, 2000 = -34.0 } }
radius = 41.6
[[bows_to_check]]
name = "left behind"
order = 2
centre = { azimuth = 0.0, elevation = -14.0 }
radius = 51.8
"""


def test_a_thousand_frames_check_in_less_than_five_seconds(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """From the command line's start to its report, in processor time, so whatever else the machine does."""
    from renderer.cli.running import run

    start = time.process_time()
    code = run(["check", str(write_shot(tmp_path, MOVING)), "--quiet"])
    assert time.process_time() - start < 5.0
    said = capsys.readouterr().out
    assert code == 1
    assert "[impossible] Bow centre: left behind" in said
    assert "right" not in re.findall(r"\] [^:]*: (\w+)  bow", said)
    assert "frame 1001\n" in said
    assert "frame 2000\n" in said
