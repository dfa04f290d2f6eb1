"""Spectral reference pictures of water, glass and rainbows, and checks of shots that break their geometry."""

__version__ = "0.1.0"
