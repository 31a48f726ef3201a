"""PDF syntax against ISO 32000-1, clause 7.3."""

from __future__ import annotations

import zlib

import pytest

from calcreport.output.syntax import Numbers, name, number, stream, string, text_string


@pytest.mark.parametrize(
    ("hundredths", "digits"),
    [(0, "0"), (5, ".05"), (50, ".5"), (1250, "12.5"), (79200, "792"), (-210, "-2.1"), (-7, "-.07")],
)
def test_hundredths(hundredths: int, digits: str) -> None:
    assert Numbers()[hundredths] == digits
    assert float(digits) == pytest.approx(hundredths / 100)


def test_numbers_are_never_written_with_exponents() -> None:
    assert [number(v) for v in (0.0, -0.0001, 1e-9, 8.5, 1234567.0)] == [b"0", b"0", b"0", b"8.5", b"1234567"]


def test_names_escape_what_is_no_plain_character() -> None:
    # 7.3.5: a slash, a space or a number sign inside a name is written as its code
    assert name("application/yaml") == b"/application#2Fyaml"
    assert name("A B#") == b"/A#20B#23"


def test_strings_escape_their_delimiters() -> None:
    assert string(b"a (b) \\ c\n") == b"(a \\(b\\) \\\\ c\\n)"


def test_text_beyond_ascii_is_utf_16_with_its_mark() -> None:
    assert text_string("B12-2") == b"(B12-2)"
    assert text_string("\u03c6") == b"<FEFF03C6>"


def test_a_stream_states_its_length_and_ends_on_a_line_of_its_own() -> None:
    data = stream(b"BT ET\n" * 20, b"/Type/Test")
    head, body = data.split(b"\nstream\n")
    packed = body.removesuffix(b"\nendstream")
    assert head == b"<</Type/Test/Filter/FlateDecode/Length %d>>" % len(packed)
    assert zlib.decompress(packed) == b"BT ET\n" * 20
