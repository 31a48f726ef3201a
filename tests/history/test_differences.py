"""Two accounts held against each other: accounts written by hand, differences told by reading them side by side."""

from __future__ import annotations

from calcreport.history.differences import differ
from calcreport.history.model import Account, Change, Difference, Entry, Kind


def entry(
    path: str, value: float | str | None = 1.0, kind: Kind = "value", formula: str = "b*h", case: str = "",
    cite: str = "1.2", verdict: str = "", again: int = 1,
) -> Entry:  # fmt: skip
    return Entry(kind, path, again, value, "in", 0.0254, formula, case, cite, verdict)


def account(*entries: Entry, verdict: str = "OK", governing: str = "flexure", stopped: str = "") -> Account:
    return Account("B1", "Beam", "beam", "DEMO-20", verdict, governing, stopped, entries)


def told(difference: Difference) -> list[tuple[str, tuple[str, ...]]]:
    return [(change.entry.path, change.differs) for change in difference.changes]


def paths(changes: tuple[Change, ...]) -> list[str]:
    return [change.entry.path for change in changes]


def test_equal_accounts_are_counted_line_by_line() -> None:
    one = account(entry("b", kind="given"), entry("A"), entry("flexure", 0.9, "check", verdict="OK"))
    difference = differ(one, one)
    assert difference.changes == () and difference.equal == 3
    assert not difference.differs


def test_the_last_bit_counts() -> None:
    # 0.1 + 0.2 is 0.30000000000000004 in double precision, one bit above 0.3 (IEEE 754)
    difference = differ(account(entry("A", 0.3)), account(entry("A", 0.1 + 0.2)))
    assert told(difference) == [("A", ("value",))] and difference.equal == 0


def test_a_number_is_no_word_and_none_is_neither() -> None:
    for one, two in ((1.0, "1.0"), (0.0, None), ("none", None)):
        assert told(differ(account(entry("A", one)), account(entry("A", two)))) == [("A", ("value",))]


def test_each_thing_that_may_differ_is_named() -> None:
    first = account(entry("A", 1.0, formula="b*h", case="b > h", cite="1.2"))
    second = account(entry("A", 1.0, formula="b*d", case="otherwise", cite="1.3"))
    assert told(differ(first, second)) == [("A", ("formula", "case", "citation"))]


def test_lines_are_matched_by_path_and_not_by_place() -> None:
    first = account(entry("A", 1.0), entry("B", 2.0), entry("C", 3.0))
    second = account(entry("new", 9.0), entry("C", 3.0), entry("after C", 8.0), entry("A", 1.0))
    difference = differ(first, second)
    # by hand: A and C stand on both sides and are equal; B is gone; two are new, told where they stand in the second
    assert difference.equal == 2
    assert told(difference) == [
        ("new", ("only in second",)), ("B", ("only in first",)), ("after C", ("only in second",)),
    ]  # fmt: skip
    assert paths(difference.inserted) == ["new", "after C"] and paths(difference.removed) == ["B"]


def test_a_check_and_a_value_of_one_name_are_two_lines() -> None:
    first = account(entry("A", 1.0), entry("A", 0.5, "check", verdict="OK"))
    second = account(entry("A", 1.0), entry("A", 0.5, "check", verdict="NG"))
    difference = differ(first, second)
    assert difference.equal == 1 and told(difference) == [("A", ("verdict",))]


def test_alike_lines_are_matched_in_their_order() -> None:
    first = account(entry("A", 1.0), entry("A", 2.0, again=2))
    second = account(entry("A", 1.0), entry("A", 3.0, again=2))
    assert told(differ(first, second)) == [("A", ("value",))]


def test_what_two_issues_are_asked_for() -> None:
    first = account(
        entry("M_u", 10.0, "given"), entry("phiM_n", 20.0), entry("flexure", 0.5, "check", verdict="OK"),
        entry("spacing", 0.4, "check", verdict="OK"),
    )  # fmt: skip
    second = account(
        entry("M_u", 25.0, "given"), entry("phiM_n", 20.0), entry("flexure", 1.25, "check", verdict="NG"),
        entry("spacing", 0.4, "check", verdict="OK"), verdict="NG",
    )  # fmt: skip
    difference = differ(first, second)
    assert paths(difference.inputs) == ["M_u"] and paths(difference.verdicts) == ["flexure"]
    assert difference.results == () and difference.equal == 2
    assert difference.verdict_flipped and not difference.governing_changed
    assert differ(account(), account(governing="spacing")).governing_changed


def test_a_calculation_on_one_side_only() -> None:
    one = account(entry("A"))
    gone, new = differ(one, None), differ(None, one)
    assert paths(gone.removed) == ["A"] and paths(new.inserted) == ["A"]
    assert gone.equal == new.equal == 0 and gone.differs and new.differs and gone.mark == new.mark == "B1"


def test_a_stop_differs_even_where_no_line_does() -> None:
    assert differ(account(), account(stopped="requirement not met")).differs
