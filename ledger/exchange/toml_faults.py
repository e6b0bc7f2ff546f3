"""What keeps a text from being TOML, as the person who wrote it would say it, and what to write instead."""

from __future__ import annotations

import re

_KEY = re.compile(r"\s*([^=#\[\]{},]*?)\s*=")
_TOKEN = re.compile(r"[^,\]}#]*")
_NUMBER = re.compile(r"[+-]?(\d*\.?\d*)")
_WITH_UNIT = re.compile(r"([+-]?\d*\.?\d+)\s*([A-Za-z%°][\w/%²³]*)")
_CLOSED_TWICE = re.compile(r"\s*\[\s*[A-Za-z_][\w.-]*\s*\]\]")
_TRUTHS = {"yes": "true", "on": "true", "no": "false", "off": "false"}
_TYPED_QUOTES = "“”„‘’«»"


def fault_of(told: str, line: str, column: int | None) -> tuple[str, str]:
    """What is wrong in a line, and what to write.

    told : the message of the standard reader, without its place.
    line : the line it names; `column` counts from 1, None at the end of the file.
    """
    if told.startswith(("Cannot overwrite", "Cannot declare", "Cannot mutate", "Duplicate")):
        return _twice(told, line)
    if told.endswith("declaration") or _CLOSED_TWICE.match(line):
        return _header(line)
    if told.startswith(("Invalid value", "Expected newline")) and (key := _KEY.match(line)) is not None:
        return _value(line, key, column)
    if told.startswith(("Invalid statement", "Expected '='", "Invalid initial")):
        return (
            "the line is neither a [table] nor a key with its value",
            "write key = value, with quotation marks round a key that has spaces, or begin a remark with #",
        )
    if told.startswith(("Unclosed", "Invalid value", "Expected newline")):
        return _open_list()
    if told.startswith(("Illegal character '\\n'", 'Expected "', "Expected '", "Unterminated")):
        return "a text has no quotation mark at its end", 'close it on its line, as in "text"'
    if told.startswith("Unescaped"):
        return r"a \ in a text has a meaning of its own", r"write / or \\ for it"
    if told.startswith(("Found invalid", "Illegal")):
        return "a sign that cannot be seen stands in the line", "delete what cannot be seen and write it anew"
    return "the line does not follow the rules of the file", "write key = value, or [table]"


def _open_list() -> tuple[str, str]:
    return (
        "a list, here or in a line above, lacks a comma or the bracket that closes it",
        "write a list as [1, 2], a group as { a = 1 }",
    )


def _twice(told: str, line: str) -> tuple[str, str]:
    header = re.match(r"\s*(\[\[?)\s*([^\]]+?)\s*\]", line)
    if header is not None:
        name = header.group(2)
        if header.group(1) == "[":
            what = f"{name} is there already, and [{name}] can be there once"
            return what, f"keep one [{name}], or write [[{name}]] at each where several may be"
        return f"{name} is there already as one table", f"write [[{name}]] at each of them"
    key = _KEY.match(line)
    inner = re.match(r"Duplicate inline table key '(.*)'", told)
    name = inner.group(1) if inner is not None else key.group(1) if key is not None else ""
    if not name:
        return "a key that ends here is there twice in its table", "keep one of the two"
    return (
        f"{name} is there twice in its table",
        "keep one of the two, or write the [[...]] line of the next one above it",
    )


def _header(line: str) -> tuple[str, str]:
    name = line.split("#", maxsplit=1)[0].strip().strip("[]").strip()
    both = line.lstrip().startswith("[[") or "]]" in line
    if re.fullmatch(r"[\w.\-\"' ]+", name) is None:
        return "the name in the brackets cannot be read", "write [name] or [[name]], letters and digits only"
    if " " in name and not name.startswith(('"', "'")):
        name = name.replace(" ", "_")
        what = "the name in the brackets has a space in it"
    else:
        what = "the brackets round the name do not match"
    return what, f"write [[{name}]]" if both else f"write [{name}]"


def _value(line: str, key: re.Match[str], column: int | None) -> tuple[str, str]:
    """A value that is no value: the whole behind the key, or one in a list."""
    name, rest = key.group(1), line[key.end() :].strip()
    if not rest or rest.startswith("#"):
        return f"nothing stands behind {name} =", f"write the value of {name}, or take the line out"
    whole = not rest.startswith(("[", "{", '"', "'"))
    if whole:
        value = rest.split("#")[0].strip()
    elif column is not None and column <= len(line):
        # In a list the place told is that of the one value.
        found = _TOKEN.match(line, column - 1)
        value = "" if found is None else found.group().strip()
    else:
        value = ""
    if (rest.startswith(("[", "{")) and not value) or (column is not None and column <= key.end()):
        return _open_list()
    better = _mended(value)
    if better is None:
        return (
            f"what stands behind {name} is no value",
            'write a number as 2.5, a text as "text", a list as [1, 2], and nothing more in the line',
        )
    return (
        f"{value} is not how a value is written",
        f"write {name} = {better}" if whole else f"write {better}",
    )


def _mended(value: str) -> str | None:
    """A value as the file has to write it; None where what is meant cannot be told."""
    comma = re.fullmatch(r"([+-]?\d*),(\d+)(\s*[A-Za-z%°].*)?", value)
    if comma is not None:
        return _mended(f"{comma.group(1)}.{comma.group(2)}{comma.group(3) or ''}")
    unit = _WITH_UNIT.fullmatch(value)
    if unit is not None:
        return f'"{_number(unit.group(1))} {unit.group(2)}"'
    if any(digit.isdigit() for digit in value) and _NUMBER.fullmatch(value):
        return _number(value)
    if value.lower() in ("true", "false"):
        return value.lower()
    if value.lower() in _TRUTHS:
        return _TRUTHS[value.lower()]
    words = value.strip(_TYPED_QUOTES)
    return f'"{words}"' if words and re.fullmatch(r"[^\W\d][\w ./-]*", words) else None


def _number(value: str) -> str:
    """A number with a digit on each side of its point, and no zero ahead of others."""
    sign = value[0] if value[0] in "+-" else ""
    before, point, after = value.removeprefix(sign).partition(".")
    return f"{sign}{before.lstrip('0') or '0'}{f'.{after or 0}' if point else ''}"
