"""Alters every rule of every template, one thing at a time, and holds that some case with an outside source notices."""
