"""What problems of project files mean and how to mend them, by slug."""

from __future__ import annotations

PROJECTS: dict[str, str] = {
    "bad-mark": """A calculation's mark cannot be used.
The mark stands in sheet numbers, bookmarks and links, so it is short and plain: a capital letter, then up to eleven
letters and digits. The marks of the front sheets and appendices are taken.

    mark: beam 1      wrong
    mark: B1          right""",
    "edition-mix": """Editions of codes that do not belong together would meet in one package.
A template is written for the editions it names, and an adopted building code refers to certain editions of others.
Name the edition the template is written for, take the template of the other edition, or correct the adopted code.

    adopted: {name: CODE, year: 2024, amendments: none}
    concrete: CONCRETE CODE-14       wrong: that code refers to CONCRETE CODE-19""",
    "include-loop": """A file is included a second time, or includes lead deeper than the program follows.
Each file is read once; a file that includes itself would never end.

    # level-3.yaml
    calculations:
      - include: level-3.yaml      wrong""",
    "link-loop": """Calculations take values from one another in a circle.
No order of work exists, so no value can be trusted. State one of the values in the project file, with its source.

    B1 takes M_u from FL1, and FL1 takes h from B1      wrong""",
    "missing-value": """A value the template needs is not given.
No value is ever assumed. Give it under `given`, with its unit; write `none` where the template allows that; for a
material property name the material beside `template:`; what a template reads from the criteria stands under `criteria`.

    given: {b: 16 in, h: 28 in}
    concrete: C5""",
    "mixed-bars": """A callout mixes bar sizes, and the template reads a diameter off it.
Bars of two sizes have no one diameter; taking the larger or the smaller would be a guess. Use one size, or give each
size a row of its own where the template takes rows.

    steel: '2#8 + 1#7'                                       wrong here
    layer: [{name: first, steel: 2#8}, {name: second, steel: 1#7}]""",
    "no-edition": """A code is named without its edition.
Clauses differ between editions, and reviewers look for the year. Write name and year.

    concrete: CONCRETE CODE         wrong
    concrete: CONCRETE CODE-19      right""",
    "no-template": """The template a calculation names, or a command asks for, is not there.
A template is named by folder and file without ending: a file of the library, or one beside the project. The names of
the library are printed by `calcreport templates`.

    template: demo/beam-flexur       wrong
    template: demo/beam-flexure      right""",
    "not-a-change": """A change as built does not say what was built otherwise, or names a value that is not to be set.
A change names a given value as the project does, rows of sets in brackets, then the value as built or a difference.
What a line works is not set, and what another calculation hands over is changed where it comes from. What like members
have in common is changed for all of them, under the mark they share.

    calcreport field samples/mill-lane B1 M_u=300kip*ft --reply RFI-031      wrong, from FL1
    calcreport field samples/mill-lane FL1 l=29ft --reply RFI-031            right
    calcreport field samples/mill-lane B1 'layer[first].steel=3-#9' h-=1in --reply RFI-031""",
    "not-a-date": """Text is not a date, or not a year.
Dates are year-month-day with all digits, so that nobody mistakes the month; the day must exist. The program never
reads a clock: the date is stated.

    date: 11/16/2026      wrong
    date: 2026-11-16      right""",
    "not-a-link": """A link does not name a line of another calculation, or stands where no line can be taken.
A link is a mark, a dot and a symbol; one row of a set is named in brackets. Bars are chosen by the engineer and are
never linked.

    M_u: {from: FL1}                            wrong
    M_u: {from: FL1.M_u}                        right
    P_u: {from: LC1.combination[4 W1].P_u}      right""",
    "not-a-row": """A row is named that its set does not have.
A factor or value for a row that is not there would be lost without a word. The names the set has are printed with
the problem.

    layer: [{name: frist, steel: 4-#9}]      wrong
    layer: [{name: first, steel: 4-#9}]      right""",
    "not-none": """The value may not be `none`.
The template says which values may be left out, and what they then are worth. Give this one.

    b: none       wrong
    b: 16 in      right""",
    "not-yet": """A key or line belongs to the language, but this version of the program does not read it.
It is refused rather than passed over, because what it says would be missing from the sheets. Leave it out and write
the work another way.

    attachments: […]      not read: hand the papers in beside the package""",
    "out-of-range": """A value lies outside the range for which the template is written.
Beyond it the formulas do not hold, so no result is given. Correct the value, or use a template that covers it.

    b: -16 in      wrong where the range is > 0""",
    "row-count": """A set has too few or too many rows.
The template states how many it can work with.

    layer: []                                 wrong where at least one is needed
    layer: [{name: first, steel: 4-#9}]       right""",
    "unknown-given": """A value is given that the template, or the part, does not take.
It would have no effect, which is rarely what is meant: most often the name is misspelled. `calcreport templates NAME`
prints what a template takes.

    given: {bw: 16 in}      wrong where the template takes b
    given: {b: 16 in}       right""",
    "wrong-material": """A material stands for a role it has no properties for, and serves another.
A template reads each role from a material: bars need a yield strength, concrete its strength. A material that has
nothing of what the role needs is most often a mark in the wrong place. Name one that has it; those that do are listed.

    materials: {C4: {f_c: 4000 psi}, G60: {f_y: 60 ksi, E_s: 29000 ksi}}
    bars: C4       wrong
    bars: G60      right""",
    "not-ready": """Something is open, and the status says that nothing is.
Under `for permit` and `issued for construction` these stop the build: a check that is NG or not evaluated, a limit
state nobody covers, an assumption to be verified, a selection among candidates that is not pinned. Settle it, give the
engineer's word on it, or issue under an earlier status.

    status: for permit                                           wrong with an assumption to be verified
    dispositions: [{check: B1.flexure, says: see drawing S-201}]  the engineer's word on a check""",
}
