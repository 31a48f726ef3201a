"""What problems of files, text and quantities mean and how to mend them, by slug."""

from __future__ import annotations

FILES: dict[str, str] = {
    "bare-number": """A number stands where a quantity needs its unit.
Without the unit nobody can tell 12 inches from 12 feet, so the program does not guess. Write the unit after the
number. The one number that needs none is 0: nothing is the same amount in every unit.

    b: 16          wrong
    b: 16 in       right
    P_D: 0         right too""",
    "cannot-write": """A file could not be written, or would have replaced something that is no PDF.
The package is written beside its place first and then moved there, so an earlier file is whole either way. See the
reason given: a missing folder, no permission, a full disk. To write elsewhere, name the file after -o.

    calcreport build samples/mill-lane -o out/mill-lane.pdf""",
    "comma-in-braces": """A comma inside braces ends an entry, and what follows it is no entry.
Between { and } commas part the entries, each `key: value`. So a comma inside a number or a title splits it. Write
thousands without a sign, or put the text in quotes; on a line of its own a value needs neither.

    C4: {f_c: 4,000 psi}          wrong
    C4: {f_c: 4000 psi}           right
    C4: {f_c: '4,000 psi'}        right""",
    "comment-cut": """The rest of a line is read as a comment, and part of a value is lost with it.
In these files a # after a space, or at the beginning of a value, starts a comment. Put text that holds such a # in
quotes; in a true comment put a space after the #.

    stirrup: 2 legs #4 @ 8 in        wrong
    stirrup: '2 legs #4 @ 8 in'      right
    b: 16 in   # width of the web    right, a comment""",
    "file-too-large": """A file, a list or a template is larger than the program reads.
The bounds keep a damaged or hostile file from exhausting the machine; ordinary work stays far below them. Share the
work between files by `include`, or the lines of a template between parts.

    calculations:
      - include: level-3.yaml""",
    "no-file": """A file that is named cannot be read.
Files are read from inside the project folder only: no absolute paths, no .. out of it, no links that lead out. They
must be UTF-8 text. Check the spelling and where the file lies.

    - include: /home/me/level-3.yaml     wrong
    - include: level-3.yaml              right""",
    "not-a-package": """A PDF cannot be read as a package, or does not carry the files it was made from.
A package is read under bounds: an encrypted or damaged file, or one that unpacks to more than a package holds, is
refused, and no password is tried. To be worked again it must carry its input files, its templates and values.json, as
packages do unless they are built with --no-attachments; a portal may have dropped them.

    calcreport verify mill-lane.pdf""",
    "no-values": """What is to be compared holds no values the program can read.
Issues are compared by their values files: values.json in a folder of issues/, the file of that name inside a package,
or what a project comes to now. One that was cut short, changed by hand, or written by an older program is not taken.

    calcreport compare issues/1 issues/2
    calcreport compare issues/2 project.yaml""",
    "not-a-callout": """Text does not name bars in a form the program knows.
Bars are written as a count and a size, several sizes joined by +; bars at a spacing with @ and, for stirrups, the
legs. Text in which # follows a space or comes first needs quotes.

    steel: four number 8       wrong
    steel: 4-#8                right
    stirrup: '#4 @ 12 in'      right""",
    "not-a-number": """A whole number is needed here.
Counts and bounds on counts are whole, from 0 up, written in digits.

    places: two      wrong
    places: 2        right""",
    "not-a-quantity": """Text is not a number with a unit.
A quantity is a number and a listed unit; lengths may also be feet and inches with fractions. Commas part thousands
only, and a fraction stands only before inches.

    h: two feet            wrong
    h: 1/2 ft              wrong
    h: 2 ft                right
    h: 18 ft 6 1/2 in      right""",
    "not-a-word": """A value is not in its closed list of words.
Such a value decides which formula is used, so a word the list does not hold has no meaning. The list is printed with
the problem; spelling and case matter.

    face: Bottom       wrong
    face: bottom       right""",
    "not-yaml": """The file is not well formed, so nothing after the place can be trusted.
Each line is `key: value` or `- entry`; keys of one mapping stand under one another, indented with spaces; brackets,
braces and quotes close. Text that holds `: ` or begins with a sign needs quotes.

    title: Beam: grid B        wrong
    title: 'Beam: grid B'      right""",
    "odd-character": """A character that cannot be seen, or that is no text, stands in the file.
It may hide what a line says. Delete it, or save the file again as plain UTF-8 text.

    b: 16<null byte> in      wrong
    b: 16 in                 right""",
    "repeated-key": """The same key stands twice in one mapping.
One of the two values would be lost without a word. Keep one.

    b: 16 in
    b: 18 in      wrong: which width?""",
    "unit-mismatch": """A quantity is of another kind than its place asks for.
Kinds are held before any value is known: only like may be added, compared, or put where a unit is declared. Either
the formula lacks a factor, or a unit is mistyped. An empirical formula says which unit its number is taken in by
num(x, unit) and which it gives by qty(e, unit).

    formula: 'k*sqrt(f_c)*b*d'                              wrong for a force
    formula: 'k*qty(sqrt(num(f_c, psi)), psi)*b*d'          right""",
    "unknown-bar": """A bar size is not in the bar table of this unit system.
The sizes are data beside the template, with their source. A size written with # is an inch-pound size and never
stands for a metric one.

    steel: 4-#25        wrong in SI units
    steel: 4 No. 25     right""",
    "unknown-key": """A key is not known where it stands, so its value would have no effect.
Most often it is misspelled or one level too deep. The keys that may stand here are printed with the problem.

    titel: Beam on grid B      wrong
    title: Beam on grid B      right""",
    "unknown-unit": """A unit is not among the listed spellings.
The list is closed and case matters, because kn is a knot and Mpa is nothing. Compound units are joined by * and /.

    M_u: 350 kip-ft        wrong
    M_u: 350 kip*ft        right
    w: 2 kn/m              wrong
    w: 2 kN/m              right""",
    "wrong-shape": """A list, a mapping or plain text stands where another of the three belongs.
Text that begins with a bracket or brace is read as a list or mapping unless it is quoted. The shape expected is
printed with the problem.

    covers: {shear}        wrong
    covers: [shear]        right""",
    "yaml-feature": """The file uses what can hide or repeat content: an anchor, alias, tag, merge key or escape.
None of them is read, so that a file says what it seems to say. Write the value out; share values through materials,
criteria or another calculation's line. Text that begins with & * or ! needs quotes.

    h: *depth      wrong
    h: 28 in       right""",
}
