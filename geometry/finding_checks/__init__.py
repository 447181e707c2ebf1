"""The checks behind ``geometry.findings``, one subject a module."""
