"""What problems of templates mean and how to mend them, by slug."""

from __future__ import annotations

TEMPLATES: dict[str, str] = {
    "ambiguous-unit": """A word after a number is both a listed unit and a symbol of the template.
`2 h` may mean two hours or twice the depth h. Write the sign of the product for the symbol, or qty for the unit.

    formula: '2 h'              wrong where h is a symbol
    formula: '2*h'              right
    formula: 'qty(2, h)'        right for two hours""",
    "arms-differ": """Branches of one block give different things under one name, or only some give a name used later.
After the block nobody could tell what the name stands for. Give it in every branch, of the same kind and in the same
sets; or use it inside the branch that gives it.

    - branches:
        - {when: 'a < b', lines: [{gives: x, formula: 'a', cite: geometry}]}
        - {otherwise: []}
    - {gives: y, formula: '2*x', cite: geometry}      wrong: no x in the other branch""",
    "bad-formula": """A formula or condition does not follow the grammar of formulas.
Products need their sign, brackets close, comparisons stand in conditions only, functions come from the fixed list.
The mark stands at the first character that does not fit.

    formula: '0.85 f_c b'        wrong
    formula: '0.85*f_c*b'        right""",
    "bad-name": """A symbol, set or stem has a name that formulas cannot use.
Names are a letter, then letters, digits and _, and none of the words of the formula language. How it prints is told
under `shows`.

    f'c: {unit: psi, says: strength}                     wrong
    f_c: {unit: psi, says: strength, shows: "f_c'"}      right""",
    "bad-range": """Text is not a range.
A range is one comparison, or two bounds in brackets: square where the bound is included, round where it is not. The
lower bound comes first; only quantities have ranges.

    range: 0 to 8 in        wrong
    range: '(0, 8 in]'      right""",
    "bad-text": """Braces in a text or a row's name stand for no value.
{symbol} shows a value; {variable} in a row's name stands for the row taken under `for`. A formula has no place there:
give its value a line of its own.

    note: 'depth {h - c_c}'      wrong
    note: 'depth {d}'            right""",
    "case-differs": """A case beside the template does not come out as its source says.
Either the template is wrong, or the case: the source stands beside the expectation. A number the program printed is
no source, so do not paste it back.

    M_n: {value: 240 kip*ft, tol: 0.5 kip*ft, source: 'textbook, Example 4-1'}""",
    "check-twice": """Two checks of a template have one name.
The summary, the cases and the schedule of members name a check by its name, so the two could not be told apart. In the
branches of one block a name may stand once in each. A part used twice takes `as`, which comes before its names.

    - {check: spacing, holds: 's <= s_max', cite: '4.2'}
    - {check: spacing, holds: 's >= s_min', cite: '4.3'}          wrong
    - {check: least spacing, holds: 's >= s_min', cite: '4.3'}    right""",
    "given-twice": """A name is given a second time where it already stands.
A name means one thing from the line that gives it to the end, so that a reader need not ask which one is meant. Take
another name. In the branches of one block a name may be given once in each. A criterion of the project stands among the
criteria alone, and in no calculation.

    - {gives: a, formula: 'b/2', cite: geometry}
    - {gives: a, formula: 'b/3', cite: geometry}      wrong""",
    "may-be-absent": """A value the project may leave out is used where it may be missing.
Use it only under a condition that asks for it, alone or joined by `and`.

    - {when: 'given(A_v)', formula: 'A_v*f_yt/s'}      right
    - {otherwise: '0 kip/in'}""",
    "missing-key": """A key that is needed is missing, or has no value.
What it would say cannot be assumed. Add it; the problem names it and marks the mapping it belongs to.

    - {check: flexure, cite: 5.1(1)}                                  wrong
    - {check: flexure, holds: 'M_u <= phiM_n', cite: 5.1(1)}          right""",
    "no-cite": """A line rests on nothing that can be looked up.
Every value and check is traced to a clause, table or equation by its number, or is plain geometry or statics. A bare
number belongs to the template's own code; another document stands in front.

    - {gives: A_g, formula: 'b*h'}                         wrong
    - {gives: A_g, formula: 'b*h', cite: geometry}         right
    cite: 'OTHER CODE: 2.3(1)'                             right""",
    "no-equation": """`as cited` holds no equation.
It states the equation as the code gives it, left = right, where the formula is a rearranged form of it; the two are
then proved equal.

    as cited: 'A_s*f_y*z'              wrong
    as cited: 'M_n = A_s*f_y*z'        right""",
    "no-otherwise": """Branches do not close with `otherwise`.
A case nobody thought of would go without a formula. The last branch is `otherwise`, alone and once; give it a
`require` before the block if the case must not occur.

    branches: [{when: 'a < b', formula: '1'}]                        wrong
    branches: [{when: 'a < b', formula: '1'}, {otherwise: '2'}]      right""",
    "not-in-figure": """A check, caution, assumption or result stands in a block of which only the figure is shown.
Of `show: figure` nothing but figures reaches the sheets; what must be read would not be there.

    - {each: point, show: figure, lines: [{check: it, …}]}      wrong
    - {each: point, lines: [{check: it, …}]}                    right""",
    "not-in-unknown": """A check, a figure or a method stands among the lines of an `unknown`.
Those lines are worked once a trial, many times over, so nothing can be judged or drawn there.

    - {unknown: c, …, lines: [{check: it, …}]}      wrong
    - {unknown: c, …, lines: […]}                   right, with the check as the next line""",
    "bad-shows": """What a symbol shows cannot be read as one.
A display is a letter, a word or the name of a Greek letter; a mark over one letter, as bar(y), hat(y), tilde(y) or
dot(y); primes; and one subscript, in braces or not. Text with a space in it stands as it is.

    shows: 'bar(y'           wrong
    shows: 'bar(y)_t'        right, a y with a bar over it and the subscript t
    shows: "eps_{cu}'"       right, as are eps'_cu, A_s,min, phiM_n and √f_c'""",
    "no-unit": """A symbol has no unit, no list of words and no kind.
Without it no formula can be held. A pure number says so with unit '1'.

    rho: {says: steel ratio}                   wrong
    rho: {unit: '1', says: steel ratio}        right""",
    "not-as-cited": """A formula does not satisfy the equation it cites.
Put into the equation for its symbol, it leaves a difference. Mend the formula or the equation; long or deep
equations cannot be proved and are better split.

    gives: a
    formula: 'A_s*f_y/(0.85*f_c)'
    as cited: '0.85*f_c*a*b = A_s*f_y'      wrong: b is missing above""",
    "nothing-unreached": """An entry `no case` gives a reason for something that needs none.
Either a case reaches it by now, or nothing of the template has this name: names are those that `lint` prints. Reasons
that no longer hold would hide what does.

    - {no case: 'check flexure NG', because: the section is chosen so that it cannot be}""",
    "part-clash": """A part gives a name that already stands where it is used.
Write `as: stem` and use the part's names with the stem in front, or let the part say under `gives` which names it
hands out.

    - {part: phi-flexure, as: bottom, same: [eps_t, eps_ty, ties]}
    - {gives: phiM, formula: 'bottom.phi*M_n', cite: 6.2(1)}""",
    "part-loop": """Parts use one another without end, or deeper than the program follows.
A part that uses itself, directly or through others, has no last line.

    # beta.yaml
    - {part: beta}      wrong""",
    "part-not-handed": """A part does not get what it takes, or gets it in the wrong shape.
A part from a file sees only what it is handed: `same` hands over our symbols and sets of that name, `with` formulas
and words. Sets and bars are handed by `same`.

    - {part: beta-1, same: [f_c]}                  wrong where it takes f_y too
    - {part: beta-1, same: [f_c, f_y, E_s]}        right""",
    "row-leak": """A value that differs from row to row is used where no row is open, or a set as if it were a value.
Use it inside `each` of its set, or gather the rows by sum, max, min, pick or linear. A set is open once at a time.

    - {gives: A, formula: 'A_si', cite: geometry}                       wrong
    - {gives: A, formula: 'sum(A_si over layer)', cite: geometry}       right""",
    "unknown-line": """A line is of no kind the language has.
The first key tells the kind: gives, check, require, branches, each, rows, part, figure, heading, note and so on.

    - {give: a, formula: 'b/2', cite: geometry}       wrong
    - {gives: a, formula: 'b/2', cite: geometry}      right""",
    "unknown-name": """A name stands for nothing that is known here.
Most often it is misspelled; near spellings are told. A symbol needs an entry among the symbols, a set must be given
or made above, a material stands under `materials`, a mark among the calculations.

    formula: 'b*dd'      wrong
    formula: 'b*d'       right""",
    "used-before-given": """A name is used above the line that gives it.
Order on the page is order of work, so that a reader can follow from top to bottom. Move the line up.

    - {gives: M, formula: 'F*z', cite: statics}
    - {gives: z, formula: 'd - a/2', cite: geometry}      wrong: too late""",
    "variant-hole": """A variant has no entry for a unit system or year the template serves.
The template would have a gap there. Add the entry, or take the system or year out of `units` or `years`.

    formula: {us: '3*x'}                      wrong where SI is served
    formula: {us: '3*x', si: '0.25*x'}        right""",
}
