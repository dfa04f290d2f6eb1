"""One frame of a shot: its scene as arrays, its rounds as exact sums, its portions on disk, and the picture."""
