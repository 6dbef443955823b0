"""Text that is no TOML, in the words of this tool; and nesting that would take ages."""

import os
import time

import pytest

from planner.files.syntax import reason_of
from planner.paper.texts import unprintable

NO_TOML = {
    "statement": (b"= 1", 1, "a line that is no key, table or comment"),
    "no equals": (b"a 1", 1, "a key without ="),
    "header": (b"[a\n", 1, "a table header without its ]"),
    "array header": (b"[[a]\n", 1, "a table header without its ]]"),
    "more": (b"a = 1 2", 1, "more text after a value or header"),
    "control": (b"a = 1 # \x07", 1, "a control character"),
    "control in text": (b'a = "\x07"', 1, "a control character"),
    "line end in text": (b'a = "b\n"', 1, "a line end inside a text"),
    "line end in plain text": (b"a = 'b\n'", 1, "a line end inside a text"),
    "value twice": (b"a = 1\na = 2\n", 2, "a key or table that is already there"),
    "table twice": (b"[site]\n[site]\n", 2,
        'the table "site", declared already or inside a closed one'),
    "deep table twice": (b"[a.b]\n[a.b]\n", 2,
        'the table "a.b", declared already or inside a closed one'),
    "in closed": (b"a = {b = 1}\n[a.c]\n", 2,
        'the table "a.c", declared already or inside a closed one'),
    "closed": (b"a = {b = 1}\na.c = 2\n", 2, 'an addition to the closed table "a"'),
    "key": (b"a. = 1", 1, "no key where one must begin"),
    "array": (b"a = [1 2]", 1, "an array without its ]"),
    "inline": (b"a = {b = 1 c", 1, "an inline table without its }"),
    "inline twice": (b"a = {b = 1, b = 2}", 1, 'the key "b" for the second time'),
    "backslash": (b'a = "b\\d"', 1, 'a single "\\" in a text'),
    "hex": (b'a = "\\u00g0"', 1, "an escape with no valid character code"),
    "scalar": (b'a = "\\ud800"', 1, "an escape with no valid character code"),
    "open text": (b'a = "b', 1, "a text without its closing quotes"),
    "open long text": (b"a = '''b", 1, "a text without its closing quotes"),
    "open plain text": (b"a = 'b", 1, "a text without its closing quote"),
    "date": (b"a = 2026-02-31", 1, "a date or time that does not exist"),
    "value": (b"a = b", 1, "no text, number, date, array or table where a value must stand"),
}  # fmt: skip


@pytest.mark.parametrize("case", NO_TOML)
def test_text_that_is_no_toml_is_told_in_our_words(folder, case):
    raw, line, found = NO_TOML[case]
    (fault,) = folder.write("stand.toml", raw).faults()
    assert (fault.line, fault.expected, fault.found) == (line, "valid TOML", found)
    assert fault.mend == "correct the text at this place"


def test_words_of_a_parser_to_come_do_not_leak():
    assert reason_of("Something new ('x',) happened") == "text that is no TOML"


def test_an_integer_of_thousands_of_digits_is_a_fault_at_its_place(folder):
    folder.write("stand.toml", b"# long\nx = " + b"9" * 10_000)
    assert folder.lines() == [
        "stand.toml:2:5: expected valid TOML, found an integer of thousands of digits;"
        " write a number of reasonable length"
    ]


@pytest.mark.parametrize("name", ["plan.toml", "rotor.toml", "stand.toml", "rules.toml"])
@pytest.mark.parametrize("depth", [45, 3_000, 900_000])
def test_a_deep_table_header_is_a_fault_and_soon(folder, name, depth):
    folder.write(name, b"# deep\n[" + b".".join([b"a"] * depth) + b"]\n")
    begun = time.perf_counter()
    line = folder.lines()[0]
    assert time.perf_counter() - begun < 2.0
    assert line == (
        f"{name}:2:2: expected a plain structure,"
        " found arrays or tables nested too deeply; nest less"
    )


@pytest.mark.parametrize(
    "raw",
    [
        b"x = " + b"[" * 60 + b"]" * 60,
        b"x = " + b"{a.b.c.d = " * 20 + b"1" + b"}" * 20,
        b'["a".' + b".".join([b"a"] * 30) + b"]\n" + b".".join([b"b"] * 30) + b" = 1",
        b"x = " + b"[" * 20_000,
    ],
)
def test_nesting_in_any_form_is_the_same_fault(folder, raw):
    (line,) = folder.write("stand.toml", raw).lines()
    assert line == (
        "stand.toml:1:1: expected a plain structure,"
        " found arrays or tables nested too deeply; nest less"
    )


def test_sentences_with_many_points_are_not_nested(folder):
    folder.edit("plan.toml", '"Climb in steps"', '"' + "Go on. Wait. " * 40 + "." * 60 + '"')
    assert folder.read().plan.objective.endswith("." * 60)


@pytest.mark.parametrize("name", ["stand.toml", "plan.toml"])
def test_a_link_that_leads_in_a_circle_is_a_fault(folder, name):
    (folder.path / name).unlink()
    (folder.path / name).symlink_to(name)
    (line,) = folder.lines()
    assert line.endswith(
        f'expected a readable file, found "{name}", a link that leads to no file;'
        " correct the link, or name the file itself"
    )


@pytest.mark.parametrize("in_folder", [True, False])
def test_a_pipe_as_plan_is_refused_unread(folder, in_folder):
    (folder.path / "plan.toml").unlink()
    os.mkfifo(folder.path / "plan.toml")
    folder.path = folder.path if in_folder else folder.path / "plan.toml"
    assert folder.lines() == [
        'plan.toml:1:1: expected a readable file, found "plan.toml",'
        " which is no regular file; name a regular file"
    ]


def test_characters_that_paper_lacks_are_named(folder):
    folder.edit("plan.toml", '"Climb in steps"', '¦"\N{CJK UNIFIED IDEOGRAPH-53F6} and \u05d0"')
    assert folder.lines(printable=unprintable) == [
        f"{folder.marks[0]}: objective: expected characters that the printed card has, found"
        " U+05D0 HEBREW LETTER ALEF, U+53F6 CJK UNIFIED IDEOGRAPH-53F6;"
        " write them in other characters"
    ]
