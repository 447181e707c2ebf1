"""The mechanics of a car's front end: pure functions over numpy arrays, no windows.

Nothing in this package imports Qt; a test holds that line.
"""
