"""Lines, marks and words on a picture, in sizes that keep up with its width."""

from __future__ import annotations

import math
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import numpy.typing as npt
from PIL import Image, ImageDraw, ImageFont

Floats = npt.NDArray[np.float64]
Colour = tuple[int, int, int]
Box = tuple[float, float, float, float]

BACK: Colour = (22, 26, 31)
FRAME_BACK: Colour = (40, 47, 56)
FRAME_LINE: Colour = (214, 220, 226)
WORDS: Colour = (226, 231, 236)
QUIET: Colour = (168, 178, 188)
LABEL_PAD = 5.0
REFERENCE_WIDTH = 1440.0  # widths and sizes below are pixels of a canvas this wide
FAR = 1e5  # canvas pixels: beyond, a projected line is not worth drawing


@dataclass(frozen=True)
class Pen:
    """A colour, a width, and the length of a dash (0 for a whole line), in pixels of the reference width."""

    colour: Colour
    width: float
    dash: int = 0


class Canvas:
    """A picture being drawn at twice its size, so that thin lines come out smooth. `clip` bounds lines and labels."""

    OVER = 2

    def __init__(self, width: int, height: int) -> None:
        self.width, self.height = width, height
        self.scale = width / REFERENCE_WIDTH
        self.clip: Box | None = None
        self._large = Image.new("RGB", (width * self.OVER, height * self.OVER), BACK)
        self._draw = ImageDraw.Draw(self._large)
        self._boxes: list[Box] = []  # what labels must not cover
        self._labels: list[tuple[tuple[float, float], str, Colour]] = []

    @property
    def image(self) -> Image.Image:
        """The picture at its own size."""
        return self._large.resize((self.width, self.height), Image.Resampling.BOX)

    def _font(self, size: float) -> ImageFont.FreeTypeFont | ImageFont.ImageFont:
        return ImageFont.load_default(max(11.0, size * self.scale) * self.OVER)

    def _line_width(self, width: float) -> int:
        return max(2, round(width * self.scale * self.OVER))

    def holds(self, x: float, y: float) -> bool:
        """Whether a place lies within the clip, or the canvas where there is none."""
        left, top, right, bottom = self.clip or (0.0, 0.0, self.width, self.height)
        return math.isfinite(x) and math.isfinite(y) and left <= x <= right and top <= y <= bottom

    def picture(self, box: Box, path: Path | None) -> None:
        """The frame's ground: a picture fitted to it, or a plain colour."""
        large = tuple(round(part * self.OVER) for part in box)
        self._draw.rectangle(large, fill=FRAME_BACK)
        if path is not None:
            from renderer.pictures.reading import read_8_bit

            size = (large[2] - large[0], large[3] - large[1])
            fitted = Image.fromarray(read_8_bit(path)).resize(size, Image.Resampling.BILINEAR)
            self._large.paste(fitted, (large[0], large[1]))

    def frame(self, box: Box) -> None:
        """The outline of the frame."""
        self._draw.rectangle([part * self.OVER for part in box], outline=FRAME_LINE, width=self._line_width(1.5))

    def path(self, places: Floats, pen: Pen) -> None:
        """A line through places (n, 2); it is broken where a place is not a number, far away, or outside the clip."""
        with np.errstate(invalid="ignore"):
            near = np.asarray((np.abs(places) < FAR).all(axis=1))  # not-a-number is not near
        joined = near[:-1] & near[1:]
        drawn = 0.0
        for start, stop in zip(places[:-1][joined], places[1:][joined], strict=True):
            length = math.dist(start, stop)
            dash = pen.dash * self.scale
            on = not pen.dash or (drawn % (2.0 * dash)) < dash
            drawn += length
            if on and self.holds(*start) and self.holds(*stop):
                ends = [(start[0] * self.OVER, start[1] * self.OVER), (stop[0] * self.OVER, stop[1] * self.OVER)]
                self._draw.line(ends, fill=pen.colour, width=self._line_width(pen.width))

    def band(self, inner: Floats, outer: Floats, colours: npt.NDArray[np.int64]) -> None:
        """The stretch between two lines of places (n, 2), filled piece by piece with `colours` (n, 3) of its starts."""
        with np.errstate(invalid="ignore"):
            near = np.asarray((np.abs(np.hstack([inner, outer])) < FAR).all(axis=1))
        for k in np.flatnonzero(near[:-1] & near[1:]):
            corners = np.array([inner[k], inner[k + 1], outer[k + 1], outer[k]])
            if any(self.holds(x, y) for x, y in corners):
                fill = (int(colours[k][0]), int(colours[k][1]), int(colours[k][2]))
                self._draw.polygon([(x * self.OVER, y * self.OVER) for x, y in corners], fill=fill)

    def _mark(self, place: tuple[float, float], reach: float) -> tuple[float, float, float]:
        """A mark's place and reach in pixels of the enlarged picture; labels will keep off it."""
        x, y, size = place[0], place[1], reach * self.scale
        self._boxes.append((x - size, y - size, x + size, y + size))
        return x * self.OVER, y * self.OVER, size * self.OVER

    def cross(self, place: tuple[float, float], colour: Colour) -> None:
        """An upright cross with a ring."""
        x, y, arm = self._mark(place, 13)
        ring, width = 0.46 * arm, self._line_width(1.8)
        self._draw.line([(x - arm, y), (x + arm, y)], fill=colour, width=width)
        self._draw.line([(x, y - arm), (x, y + arm)], fill=colour, width=width)
        self._draw.ellipse([x - ring, y - ring, x + ring, y + ring], outline=colour, width=width)

    def disc(self, place: tuple[float, float], colour: Colour) -> None:
        """A filled disc with a ring around it."""
        x, y, ring = self._mark(place, 14)
        disc = 0.6 * ring
        self._draw.ellipse([x - disc, y - disc, x + disc, y + disc], fill=colour)
        self._draw.ellipse([x - ring, y - ring, x + ring, y + ring], outline=colour, width=self._line_width(1.4))

    def saltire(self, place: Floats, colour: Colour) -> None:
        """A diagonal cross."""
        if self.holds(float(place[0]), float(place[1])):
            x, y, arm = self._mark((float(place[0]), float(place[1])), 8)
            for sign in (-1, 1):
                ends = [(x - arm, y - sign * arm), (x + arm, y + sign * arm)]
                self._draw.line(ends, fill=colour, width=self._line_width(1.8))

    def arrow(self, towards: tuple[float, float], words: str, colour: Colour) -> None:
        """An arrow just inside the clip, pointing to a place outside it."""
        left, top, right, bottom = self.clip or (0.0, 0.0, float(self.width), float(self.height))
        middle = (0.5 * (left + right), 0.5 * (top + bottom))
        dx, dy = towards[0] - middle[0], towards[1] - middle[1]
        inset = 16 * self.scale
        reach = min(
            (0.5 * (right - left) - inset) / abs(dx) if dx else math.inf,
            (0.5 * (bottom - top) - inset) / abs(dy) if dy else math.inf,
        )
        tip = (middle[0] + reach * dx, middle[1] + reach * dy)
        length = math.hypot(dx, dy)
        ux, uy, size = dx / length, dy / length, 15 * self.scale
        base = (tip[0] - size * ux, tip[1] - size * uy)
        corners = [tip, (base[0] - 0.5 * size * uy, base[1] + 0.5 * size * ux)]
        corners.append((base[0] + 0.5 * size * uy, base[1] - 0.5 * size * ux))
        self._draw.polygon([(x * self.OVER, y * self.OVER) for x, y in corners], fill=colour)
        self.label((tip[0] - 2 * size * ux, tip[1] - 2 * size * uy), words, colour)

    def label(self, place: tuple[float, float], words: str, colour: Colour) -> None:
        """Words beside a place; they are written by `write_labels`, when every mark is known."""
        self._labels.append((place, words, colour))

    def write_labels(self) -> None:
        """Write the words asked for, on a dark ground, inside the clip, off the marks and off each other."""
        for place, words, colour in self._labels:
            box = self._free_box(place, words)
            self._boxes.append(box)
            self._draw.rectangle([part * self.OVER for part in box], fill=BACK)
            spot = ((box[0] + LABEL_PAD * self.scale) * self.OVER, 0.5 * (box[1] + box[3]) * self.OVER)
            self._draw.text(spot, words, fill=colour, font=self._font(20), anchor="lm")

    def _free_box(self, place: tuple[float, float], words: str) -> Box:
        """The first free place for words: right above, right below, left above, left below; else right above."""
        left, top, right, bottom = self.clip or (0.0, 0.0, float(self.width), float(self.height))
        pad, off = LABEL_PAD * self.scale, 16 * self.scale
        wide = self._font(20).getlength(words) / self.OVER + 2 * pad
        high = max(11.0, 20 * self.scale) * 1.3 + pad
        boxes = []
        for x, y in (
            (off, -off - high),
            (off, off),
            (-off - wide, -off - high),
            (-off - wide, off),
            (off, 3 * off + high),
        ):
            x = min(max(place[0] + x, left + pad), right - wide - pad)
            y = min(max(place[1] + y, top + pad), bottom - high - pad)
            boxes.append((x, y, x + wide, y + high))
        return next((box for box in boxes if not any(_overlap(box, other) for other in self._boxes)), boxes[0])

    def clear_below(self, top: float) -> None:
        """Take away the clip and whatever reaches below `top`."""
        self.clip = None
        self._draw.rectangle([0, top * self.OVER, self.width * self.OVER, self.height * self.OVER], fill=BACK)

    def title(self, top: float, words: str) -> None:
        """One line of words at the left, `top` from the top."""
        spot = (28 * self.scale * self.OVER, (top + 24 * self.scale) * self.OVER)
        self._draw.text(spot, words, fill=WORDS, font=self._font(25), anchor="lm")

    def key(self, top: float, entries: list[tuple[str, tuple[Colour, ...], int]]) -> None:
        """Samples of lines with what they mean, in rows under the title."""
        font = self._font(20)
        x, y, sample = 28.0 * self.scale, top + 70 * self.scale, 44 * self.scale
        for words, colours, dash in entries:
            wide = sample + 10 * self.scale + font.getlength(words) / self.OVER
            if x + wide > self.width - 20 * self.scale:
                x, y = 28.0 * self.scale, y + 38 * self.scale
            for index, colour in enumerate(colours):
                row = y + (index - 0.5 * (len(colours) - 1)) * 2.6 * self.scale
                line = np.column_stack([np.linspace(x, x + sample, 45), np.full(45, row)])
                self.path(line, Pen(colour, 2.0, dash))
            spot = ((x + sample + 10 * self.scale) * self.OVER, y * self.OVER)
            self._draw.text(spot, words, fill=WORDS, font=font, anchor="lm")
            x += wide + 34 * self.scale

    def notes(self, top: float, lines: list[str]) -> None:
        """Lines of smaller words at the left."""
        for index, words in enumerate(lines):
            spot = (28 * self.scale * self.OVER, (top + (6 + 32 * index) * self.scale) * self.OVER)
            self._draw.text(spot, words, fill=QUIET, font=self._font(20), anchor="lm")


def _overlap(a: Box, b: Box) -> bool:
    return a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]
