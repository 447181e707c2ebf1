"""The program around the geometry: command line, window, panels and sheets."""

__version__ = "0.1.0"
