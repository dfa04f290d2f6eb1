"""Findings: what in a shot cannot be, measured, explained and with the change that would mend it.

`run.check_shot` asks every rule of `registry.TABLE` (and a studio's own, by entry point) about a shot and gives back a
`report.CheckReport`. A rule is a pure function from frames to findings; each family has its own files. Pictures are
not read here, and nothing is rendered.
"""
