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
        self._boxes: list[Box] = []

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
            with Image.open(path) as found:
                fitted = found.convert("RGB").resize(
                    (large[2] - large[0], large[3] - large[1]), Image.Resampling.BILINEAR
                )
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

    def cross(self, place: tuple[float, float], colour: Colour) -> None:
        """An upright cross with a ring."""
        x, y = (part * self.OVER for part in place)
        arm, ring = 13 * self.scale * self.OVER, 6 * self.scale * self.OVER
        width = self._line_width(1.8)
        self._draw.line([(x - arm, y), (x + arm, y)], fill=colour, width=width)
        self._draw.line([(x, y - arm), (x, y + arm)], fill=colour, width=width)
        self._draw.ellipse([x - ring, y - ring, x + ring, y + ring], outline=colour, width=width)

    def saltire(self, place: Floats, colour: Colour) -> None:
        """A diagonal cross."""
        x, y = float(place[0]) * self.OVER, float(place[1]) * self.OVER
        if self.holds(x / self.OVER, y / self.OVER):
            arm = 8 * self.scale * self.OVER
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
        """Words beside a place, on a dark ground, moved to stay inside the clip and off earlier words."""
        font = self._font(20)
        left, top, right, bottom = self.clip or (0.0, 0.0, float(self.width), float(self.height))
        wide = font.getlength(words) / self.OVER
        high, pad = 26 * self.scale, 5 * self.scale
        x = min(max(place[0] + 14 * self.scale, left + pad), right - wide - 3 * pad)
        y = min(max(place[1] - high - 2 * pad, top + pad), bottom - high - pad)
        box = (x - pad, y - pad, x + wide + pad, y + high + pad)
        while any(_overlap(box, other) for other in self._boxes) and box[3] + high < bottom:
            box = (box[0], box[1] + high + 3 * pad, box[2], box[3] + high + 3 * pad)
        self._boxes.append(box)
        self._draw.rectangle([part * self.OVER for part in box], fill=BACK)
        spot = ((box[0] + pad) * self.OVER, (box[1] + 0.5 * (high + 2 * pad)) * self.OVER)
        self._draw.text(spot, words, fill=colour, font=font, anchor="lm")

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


def _overlap(a: Box, b: Box) -> bool:
    return a[0] < b[2] and b[0] < a[2] and a[1] < b[3] and b[1] < a[3]
