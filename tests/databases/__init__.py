"""Test beams worked through the templates: `python -m tests.databases FOLDER`, tables of tests read from that folder."""
