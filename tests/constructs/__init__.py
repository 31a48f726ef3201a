"""Every construct of the template language on a finished sheet: its text in reading order, and where it stands.

`finished` builds a small project and reads its sheet with two engines that are not ours; each module here holds the
constructs of one kind against words and places written by hand.
"""
