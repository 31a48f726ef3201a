"""The program's name and version as sheets and files state them."""

VERSION = "0.1.0"
PROGRAM = f"calcreport {VERSION}"
