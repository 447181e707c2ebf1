"""The floor: the front view of the car, its nails, strings, tags and tapes."""
