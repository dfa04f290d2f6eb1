"""antisolar inside other applications.

`session.Session` renders a shot in this process, round by round, and gives its picture as a NumPy array. Its rounds are
those of the command line: the same shot, frame and seed give the same bits.
"""
