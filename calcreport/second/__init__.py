"""The second path: every value worked again by code that shares only the expression tree with the first.

Thirty-digit arithmetic, quantities with units all the way, unit factors of another library, numbers read anew
from the project file's own spellings. It is evidence against mistakes of the program, never a check of a design.
"""
