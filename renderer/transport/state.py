"""The state of a path between two events: its ray, its branches and what it has met."""

from __future__ import annotations

from renderer.base.jit import kernel
from renderer.transport.layout import (
    AFTER,
    BRANCH,
    DEPTH,
    INSTANCE_AFTER,
    INTERFACES,
    KIND,
    MIS,
    N_REALS,
    N_WHOLE,
    ORIGIN,
    PRIMITIVE_AFTER,
    RATIO,
    ROUGH_SEEN,
    SKY,
    SMOOTH_SINCE,
    SOLO,
    SPLITS,
    START,
)
from renderer.transport.points import pair
from renderer.transport.stokes import (
    importance,
)


@kernel
def first_kind(work, k, kind):
    """Name the kind of light that a path finds, by its first event."""
    if work.whole[k, KIND] == SKY:
        work.whole[k, KIND] = kind


@kernel
def new_ray(work, k, ox, oy, oz):
    """Start the path's ray afresh from a point."""
    reals, whole = work.reals, work.whole
    reals[k, ORIGIN], reals[k, ORIGIN + 1], reals[k, ORIGIN + 2] = ox, oy, oz
    reals[k, AFTER] = 0.0
    whole[k, INSTANCE_AFTER] = -1
    whole[k, PRIMITIVE_AFTER] = -1


@kernel
def same_ray(work, k, t, instance, primitive):
    """Let the path's ray run on behind a hit."""
    work.reals[k, AFTER] = t
    work.whole[k, INSTANCE_AFTER] = instance
    work.whole[k, PRIMITIVE_AFTER] = primitive


@kernel
def lane_count(work, k):
    """How many lanes still carry light: four, or the hero alone."""
    return 1 if work.whole[k, SOLO] == 1 else 4


@kernel
def smooth_event(work, k):
    """Note that the path has met a smooth interface."""
    work.reals[k, MIS] = 0.0
    work.whole[k, INTERFACES] += 1
    if work.whole[k, ROUGH_SEEN] == 1:
        work.whole[k, SMOOTH_SINCE] = 1


@kernel
def copy_slot(work, k):
    """Copy a path into the next slot up."""
    reals, whole, sets = work.reals, work.whole, work.sets
    for i in range(N_REALS):
        reals[k + 1, i] = reals[k, i]
    for i in range(N_WHOLE):
        whole[k + 1, i] = whole[k, i]
    sets[k + 1, 0] = sets[k, 0]
    sets[k + 1, 1] = sets[k, 1]


@kernel
def split(work, k):
    """Make two paths of one: k, and a copy in the next slot up, each with sample dimensions of its own."""
    work.whole[k, SPLITS] -= 1
    copy_slot(work, k)
    work.whole[k, BRANCH] = 2 * work.whole[k, BRANCH] + 1
    work.whole[k + 1, BRANCH] = 2 * work.whole[k + 1, BRANCH] + 2


@kernel
def note_start(work, k):
    """Remember what a new branch carries: roulette compares with that, so that no branch is cut for being faint."""
    work.reals[k, START] = importance(work.reals, k)


@kernel
def ratio_sum(reals, k):
    """Sum of the lanes' density ratios."""
    return reals[k, RATIO] + reals[k, RATIO + 1] + reals[k, RATIO + 2] + reals[k, RATIO + 3]


@kernel
def dimension(work, k, purpose):
    """The sample dimension of a purpose at a path's present event."""
    return (work.whole[k, BRANCH] << 24) | (work.whole[k, DEPTH] << 4) | purpose


@kernel
def draw(work, k, purpose):
    """Two sample numbers in [0, 1) for a purpose at a path's present event."""
    return pair(work.sample[0], work.sample[1], dimension(work, k, purpose))
