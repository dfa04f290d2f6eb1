"""Reports: what a check found, as text for a terminal, JSON for a machine, and one HTML page for a meeting.

No arithmetic of its own: everything that is shown was worked out by the rooms below, and is only laid out here.
"""
