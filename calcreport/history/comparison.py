"""Two issues held against each other: calculations by their marks, then by what they are; facts by their names.

`Issued` twice in, `Comparison` out; a pure function.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable

from calcreport.history.differences import differ
from calcreport.history.model import Account, Comparison, Fact, FactChange, Issued


def compare_issues(first: Issued, second: Issued) -> Comparison:
    """Return how two issues differ: every line of every calculation is compared."""
    before = {account.mark: account for account in first.accounts}
    after = {account.mark: account for account in second.accounts}
    renamed = _renamed([a for mark, a in before.items() if mark not in after],
                       [a for mark, a in after.items() if mark not in before])  # fmt: skip
    pairs = {mark: before.get(mark) or renamed.get(mark) for mark in after}
    found = [differ(pairs[mark], account) for mark, account in after.items()]
    taken = {account.mark for account in pairs.values() if account is not None}
    found += [differ(account, None) for mark, account in before.items() if mark not in taken]
    return Comparison(first, second, tuple(found), tuple(_facts(first.facts, second.facts)))


def _renamed(gone: list[Account], new: list[Account]) -> dict[str, Account]:
    """Return the earlier account by the new mark, where that is certain: one title, template and set of given values,
    and no other calculation like it on either side."""
    by_kind = {_kind(account): account for account in gone}
    alike = Counter(map(_kind, gone)), Counter(map(_kind, new))
    kinds = ((account.mark, _kind(account)) for account in new)
    return {mark: by_kind[kind] for mark, kind in kinds if alike[0][kind] == alike[1][kind] == 1}


def _kind(account: Account) -> tuple[object, ...]:
    """Return what a calculation is, its mark apart; a link may lead to a calculation that is renamed too."""
    given = tuple((e.path, e.again, e.value, e.unit, "" if e.linked else e.cite) for e in account.entries
                  if e.kind == "given")  # fmt: skip
    return account.title, account.template, given


def _facts(before: tuple[Fact, ...], after: tuple[Fact, ...]) -> Iterable[FactChange]:
    """Yield the facts that differ; one without a name is known by its text."""
    old, new = ({_named(fact): fact for fact in facts} for facts in (before, after))
    for name, fact in new.items():
        if name not in old or old[name].text != fact.text:
            yield FactChange(old.get(name), fact)
    for name, fact in old.items():
        if name not in new:
            yield FactChange(fact, None)


def _named(fact: Fact) -> tuple[str, str]:
    return fact.group, fact.name or fact.text
