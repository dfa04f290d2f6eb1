"""Picture against picture: how far another picture is from the reference, in stops and in colour differences.

`pixel_differences` works on scene-linear pictures of one size; nothing is aligned, scaled or exposed for the user.
"""
