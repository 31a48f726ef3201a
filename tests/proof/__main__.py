"""Prove packages from the command line: `python -m tests.proof PACKAGE.pdf …`."""

from __future__ import annotations

import sys
from collections import Counter
from pathlib import Path

from .package import read_package
from .prove import Proof, look


def main() -> int:
    """Print figures, findings and unread lines of each package; 1 if there is any finding."""
    wrong = 0
    for name in sys.argv[1:]:
        proof = Proof(name, Path(name), 0, "")
        look(proof, read_package(Path(name)), 10_000)
        account = proof.account
        print(
            f"{name}: {account.lines} numbered lines on {proof.sheets} sheets, {account.worked} with something to work,"
        )
        print(f"  {account.confirmed} confirmed, {account.unread_lines} not read in full; {dict(account.counts)}")
        print(f"  significant digits of computed values: {dict(sorted(account.digits.items()))}")
        findings = [*account.findings, *proof.numbering, *proof.marks, *proof.overlaps, *proof.sampler]
        order = [f"{program}: {text}" for program, found in proof.order.items() for text in found]
        for text in [
            *map(str, findings),
            *map(str, account.unread),
            *order,
            *(f"long: {x}" for x in account.long),
        ]:
            print(" ", text)
        print(" ", dict(Counter(finding.claim for finding in findings)))
        wrong += len(findings) + len(order)
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.exit(main())
