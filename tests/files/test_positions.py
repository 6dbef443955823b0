"""The position index against tomllib, on written and on random documents."""

import json
import random
import tomllib

import pytest

from planner.files.positions import KeyPath, index

DOCUMENT = '''# comment with [brackets] = "x"
top = 1  # trailing
"quoted.key" = 'literal # not a comment'
a.b . "c d" = """
multi = "line" \\""" more
]"""
dates = [1979-05-27 07:32:00, 2026-01-01T00:00:00Z,
  07:32:00,  # one of them
]
point = { x = 1, "y" = { z = [ { q = 2 }, [3, 4] ] } }
empty = []
nothing = {}
quotes = """a"""""
apostrophes = \'\'\'it\'s\'\'\'\'
[ table . inner ]
k = true
[[list]]
[[list.sub]]
n = 1
[[list.sub]]
n = 2
[[list]]
[list.last]
[[list.sub]]
n = 3
[table]
"\\u00e9" = 1
'''


def walk(data: object, path: KeyPath = ()) -> dict[KeyPath, object]:
    found: dict[KeyPath, object] = {path: data} if path else {}
    if isinstance(data, dict):
        for key, value in data.items():
            found |= walk(value, (*path, key))
    if isinstance(data, list):
        for i, value in enumerate(data):
            found |= walk(value, (*path, i))
    return found


def check(text: str) -> int:
    data = tomllib.loads(text)
    found = index(text)
    paths = walk(data)
    assert set(found.keys) == set(paths)
    lines = text.replace("\r\n", "\n").split("\n")
    for path, value in paths.items():
        line, column = found.key(path)
        rest = lines[line - 1][column - 1 :]
        if isinstance(path[-1], str):
            shown = (path[-1], json.dumps(path[-1]), f"'{path[-1]}'", '"\\u00e9"')
            assert rest.startswith(shown), (path, rest)
        if path in found.values and not isinstance(value, dict | list):
            line, column = found.value(path)
            after = "\n".join([lines[line - 1][column - 1 :], *lines[line:]])
            assert starts_with_value(after, value), (path, after[:40])
    return len(paths)


def starts_with_value(text: str, value: object) -> bool:
    """Is some beginning of the text that value in TOML?"""
    for end in range(1, len(text) + 1):
        try:
            if tomllib.loads(f"v = {text[:end]}") == {"v": value}:
                return True
        except tomllib.TOMLDecodeError:
            continue
    return False


def test_every_key_of_a_rich_document_is_found():
    assert check(DOCUMENT) > 30


def test_windows_line_ends_give_the_same_places():
    assert index(DOCUMENT.replace("\n", "\r\n")) == index(DOCUMENT)


@pytest.mark.parametrize(
    ("path", "place"),
    [
        (("top",), (2, 1)),
        (("a", "b", "c d"), (4, 7)),
        (("point", "y", "z", 0, "q"), (10, 34)),
        (("list", 0, "sub", 1, "n"), (21, 1)),
        (("list", 1, "last"), (23, 7)),
        (("list", 1, "sub", 0), (24, 8)),
        (("table",), (26, 2)),
    ],
)
def test_keys_stand_where_an_editor_shows_them(path, place):
    assert index(DOCUMENT).key(path) == place


def test_value_place_is_behind_the_sign():
    assert index('[t]\n  key  =   "v"').value(("t", "key")) == (2, 12)


def test_a_missing_key_points_to_the_table_around_it():
    found = index("[t]\nk = { a = 1 }")
    assert found.key(("t", "k", "lacking")) == (2, 1)
    assert found.value(("t", "lacking")) == (1, 2)
    assert found.key(("lacking",)) == (1, 1)


class Writer:
    """Writes random TOML in all the forms that the format has."""

    def __init__(self, seed: int) -> None:
        self.random = random.Random(seed)  # noqa: S311 (test data)
        self.names = iter(range(10**6))

    def key(self) -> str:
        name = f"k{next(self.names)}"
        return self.random.choice(
            [name, f'"{name} #"', f"'{name} ='", f'"{name}\\t"', f"-{name}_"]
        )

    def value(self, depth: int) -> str:
        pick = self.random.randrange(12 if depth < 3 else 8)
        if pick in {8, 9}:
            gap = self.random.choice(["", " ", "\n  # ] } note\n "])
            inside = f",{gap}".join(self.value(depth + 1) for _ in range(self.random.randrange(4)))
            return f"[{gap}{inside}{gap}]"
        if pick > 9:
            inside = ", ".join(self.pair(depth + 1) for _ in range(self.random.randrange(4)))
            return "{ " + inside + " }"
        return [
            "1", "-2.5e3", "true", '"a # ] \\" }"', "'[x] = \\'", '"""\n"q" = [\n\\"""x"""',
            "'''\n]]\n''y'''", "1979-05-27 07:32:00.5",
        ][pick]  # fmt: skip

    def pair(self, depth: int) -> str:
        dots = self.random.choice([".", " . "])
        name = dots.join(self.key() for _ in range(self.random.choice([1, 1, 1, 2, 3])))
        return f"{name}{self.random.choice(['=', ' = ', '  =  '])}{self.value(depth)}"

    def document(self) -> str:
        lines = [self.pair(0) for _ in range(self.random.randrange(4))]
        parents = [""]
        for _ in range(self.random.randrange(6)):
            name = self.random.choice(parents) + self.key()
            repeats = self.random.choice([0, 1, 2])
            for _ in range(max(1, repeats)):
                lines.append(f"[[{name}]] # note" if repeats else f"  [ {name} ]")
                lines += [self.pair(0) for _ in range(self.random.randrange(4))]
            parents.append(f"{name}.")
        return "\n".join(lines)


@pytest.mark.parametrize("seed", range(150))
def test_random_documents_agree_with_tomllib(seed):
    check(Writer(seed).document())
