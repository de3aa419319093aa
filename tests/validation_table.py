"""Write the table of what the mechanics is checked against into DEVELOPERS.md.

Run ``python tests/validation_table.py`` after adding a source. Each row states how closely the source is
met and, where one function tells, computes it; `test_validation_table.py` holds the statement against the
computation and the page against the rows.
"""

from __future__ import annotations

from pathlib import Path

from validation_rows import ROWS

PAGE = Path(__file__).parents[1] / "DEVELOPERS.md"
HEADING = "## What the mechanics is checked against"
INTRO = """
Written by `tests/validation_table.py`; a test holds it against the code. "Seen" means the number was read
in the source, "memory" that the source is known but no page of it was opened, "computed" that it needs
none: an exact solution, or two methods that agree. Differences are relative to the source's number.
"""
NOT_MET = """
What is not met, or not used, and why:

- Lubinski's second-order load, 3.75, is a contact problem and no second eigenvalue (3.88 at length 20); it is
  not used.
- The vertical constants 2.55 and 5.55 (from memory) come out of an energy argument that bounds loads from
  above (`test_wu_juvkam_wold_1993`). 5.55 is used for helical onset in a vertical hole and named so; 2.55
  is not used, as the string's own load is lower.
- Lubinski's 1.94 is met at length 7.93 only: strings of other lengths have other loads (`columns`).
- A ratio factor of one web tutorial is 2e-4 off its own coordinates; two displacements elsewhere have swapped
  or hand-rounded digits; they are left out, as are four misprints of a copy of API RP 7G's table 2.
- Block efficiencies of a textbook table from 12 lines on do not follow its own sheave ratio, and three collar
  weights of a handbook (9-1/2 and 9-3/4 in) are 1 lb/ft off their own sections; left out.
- What no function here reckons is not checked: other survey methods than minimum curvature, mechanical
  specific energy, pinned spans, side force limits of a joint, power at the hook.
- Weights of drill pipe with tool joints are table values and can't be derived to better than 4 %: the tally's
  own weights are taken.
- Mitchell's unloading limit, 1.414 F_DP, is 3.2 % above our own, 1.3704, which two methods give.
"""


def table() -> str:
    """Give the section's text, from the heading to its end."""
    lines = ["| source | known | what it checks | test | met within |", "|---|---|---|---|---|"]
    lines += [
        f"| {row.source} | {row.known} | {row.checks} | `{row.file}` | {row.within:.0e} |".replace(
            "e-0", "e-"
        )
        for row in ROWS
    ]
    return "\n".join([HEADING, INTRO, *lines, NOT_MET])


def placed(page: str) -> str:
    """Put the section into the text of the page, in place of the one there or at its end."""
    before, found, rest = page.partition(HEADING)
    after = rest[rest.index("\n## ") + 1 :] if "\n## " in rest else ""
    if not found:
        before, after = page.rstrip("\n") + "\n\n", ""
    return before + table() + ("\n" + after if after else "")


if __name__ == "__main__":
    PAGE.write_text(placed(PAGE.read_text(encoding="utf-8")), encoding="utf-8")
