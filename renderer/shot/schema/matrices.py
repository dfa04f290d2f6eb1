"""Rules for matrices of 16 numbers, row by row."""

from __future__ import annotations

from collections.abc import Iterator

from renderer.shot.keyed import Keys, Values
from renderer.shot.schema.flaws import Flaw, Path

RIGID_SLACK = 1e-4  # of the cosines between axes, and of their lengths against each other
LAYOUT = "16 numbers, row by row, that end in 0, 0, 0, 1 and have the position at 4, 8 and 12"


def each(at: Path, value: Values) -> Iterator[tuple[Path, tuple[float, ...]]]:
    """Every matrix of a value that may be keyed, with the path to it."""
    if isinstance(value, Keys):
        yield from (((*at, str(frame)), numbers) for frame, numbers in zip(value.frames, value.values, strict=True))
    else:
        yield at, value


def affine_flaws(at: Path, value: Values) -> Iterator[Flaw]:
    """What keeps a matrix from placing an object."""
    for path, m in each(at, value):
        if m[12:] != (0.0, 0.0, 0.0, 1.0):
            turned = m[3] == m[7] == m[11] == 0.0 and m[15] == 1.0
            yield Flaw(path, "`{key}` is written column by column" if turned else "`{key}` is no affine matrix", LAYOUT)
        elif determinant(m) == 0.0:
            yield Flaw(path, "`{key}` flattens the object", "a matrix that can be undone")


def rigid_flaws(at: Path, value: Values) -> Iterator[Flaw]:
    """What keeps a matrix from placing a camera: only turning, moving and one scale for all axes may be in it."""
    for path, m in each(at, value):
        wrong = list(affine_flaws(path, m))
        yield from wrong
        if wrong:
            continue
        if determinant(m) < 0.0:
            yield Flaw(path, "`{key}` mirrors the picture", "a matrix that turns and moves only")
        elif not _even(m):
            yield Flaw(path, "`{key}` shears or stretches the picture", "a matrix that turns and moves only")


def determinant(m: tuple[float, ...]) -> float:
    """Of the upper left 3 x 3."""
    return (
        m[0] * (m[5] * m[10] - m[6] * m[9]) - m[1] * (m[4] * m[10] - m[6] * m[8]) + m[2] * (m[4] * m[9] - m[5] * m[8])
    )


def _even(m: tuple[float, ...]) -> bool:
    """Whether the three axes have one length and stand square to each other."""
    columns = [(m[i], m[4 + i], m[8 + i]) for i in range(3)]
    gram = [[sum(p * q for p, q in zip(a, b, strict=True)) for b in columns] for a in columns]
    size = (gram[0][0] + gram[1][1] + gram[2][2]) / 3.0
    return all(abs(gram[i][j] / size - (i == j)) <= 2.0 * RIGID_SLACK for i in range(3) for j in range(3))
