"""Stack files: the layers in TOML with conditions, limits, sizes, cases, zones and constraints beside them."""

from __future__ import annotations

import os
import re
from typing import TYPE_CHECKING

from stackdb.errors import FileError, InputError
from stackdb.quantities.printing import printable, shortened
from stackdb.stack.grammar import parse_stack
from stackdb.stack.layers import Stack

if TYPE_CHECKING:
    from typing import BinaryIO

STANDARD_INPUT = "-"
SUFFIX = ".toml"
LARGEST_FILE = 2_000_000
_TOML_LINE = r"""\s*(?:[\w"'.-]+\s*=|\[)"""


def _shown(path: str) -> str:
    return "standard input" if path == STANDARD_INPUT else shortened(path, 120)


def _bytes(handle: BinaryIO, path: str) -> bytes:
    data = handle.read(LARGEST_FILE + 1)
    if len(data) > LARGEST_FILE:
        raise FileError("file-too-large", f"{_shown(path)} is above {LARGEST_FILE} bytes", "a stack file is small")
    return data


def _read(path: str) -> str:
    """The text of a file or of standard input; FileError where there is none."""
    try:
        if path == STANDARD_INPUT:
            import sys

            buffer = getattr(sys.stdin, "buffer", None)
            data = _bytes(buffer, path) if buffer is not None else sys.stdin.read().encode()
        else:
            with open(path, "rb") as handle:
                data = _bytes(handle, path)
        return data.decode("utf-8-sig")
    except FileError:
        raise
    except FileNotFoundError:
        hint = "a stack file's name ends in .toml; anything else is read as layers"
        raise FileError("file-missing", f'no file "{_shown(path)}"', hint) from None
    except UnicodeDecodeError:
        raise FileError("file-damaged", f"{_shown(path)} is not UTF-8 text", "save it as UTF-8") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise FileError("file-unreadable", f"{_shown(path)} cannot be read: {printable(reason)}") from None


def _is_toml(text: str) -> bool:
    """Whether the first line that says something is a key or a table, rather than a layer."""
    lines = (line for line in text.split("\n") if line.strip() and not line.lstrip().startswith("#"))
    return bool(re.match(_TOML_LINE, next(lines, "")))


def read_stack(path: str | os.PathLike[str]) -> Stack:
    """A stack from a file, or from standard input (``-``): TOML, else plain layers.

    FileError for a file that is missing, damaged or from a newer version; InputError for what it says.
    """
    name = os.fspath(path)
    text = _read(name)
    if name.casefold().endswith(SUFFIX) or _is_toml(text):
        from stackdb.stack.filetext import stack_of

        return stack_of(text, _shown(name))
    return parse_stack(text)


def _is_file(text: str) -> bool:
    """Whether text names a file: ``-``, or one word that ends in .toml (several words where there is such a file)."""
    if text == STANDARD_INPUT:
        return True
    if "\n" in text or not text.casefold().endswith(SUFFIX):
        return False
    return len(text.split()) == 1 or os.path.isfile(text)  # noqa: PTH113 - pathlib costs start-up time


def load(source: str | os.PathLike[str] | Stack) -> Stack:
    """A stack from its text, a file's name, a path, ``-`` or a Stack.

    >>> load("pmma 2mm / acrylic-oca 150um").layers[1].name
    'acrylic-oca'
    """
    if isinstance(source, Stack):
        return source
    if not isinstance(source, str):
        return read_stack(source)
    text = source.strip()
    return read_stack(text) if _is_file(text) else parse_stack(source)


def _check_replaceable(path: str) -> None:
    """FileError where a file stands that is no stack file."""
    try:
        with open(path, "rb") as handle:
            text = _bytes(handle, path).decode("utf-8-sig")
        from stackdb.stack.filetext import is_stack_file

        if is_stack_file(text):
            return
    except FileNotFoundError:
        return
    except (FileError, UnicodeDecodeError):
        pass
    except OSError as error:
        raise FileError("file-unwritable", f"{_shown(path)} cannot be replaced: {error.strerror}") from None
    raise FileError("file-not-ours", f"{_shown(path)} is there and is no stack file", "choose another name")


def write_stack(stack: Stack, path: str | os.PathLike[str]) -> None:
    """Write a stack file in one canonical form, at once or not at all.

    FileError where it cannot be written or another kind of file stands; InputError for a name that does not end in
    .toml, and for a stack whose text would not read back the same.
    """
    from stackdb.stack.filetext import toml_text

    name = os.fspath(path)
    if not name.casefold().endswith(SUFFIX):
        raise InputError("file-name", f'"{shortened(name)}" does not end in .toml', f"write {shortened(name)}.toml")
    data = toml_text(stack).encode()
    target = os.path.realpath(name)
    _check_replaceable(target)
    fresh = f"{target}.{os.getpid()}.part"
    try:
        _write_and_move(data, fresh, target)
    except OSError as error:
        raise FileError("file-unwritable", f"{_shown(name)} cannot be written: {error.strerror}") from None


def _write_and_move(data: bytes, fresh: str, target: str) -> None:
    with open(fresh, "xb") as handle:
        try:
            handle.write(data)
            handle.flush()
            os.fsync(handle.fileno())
            if os.path.exists(target):  # noqa: PTH110 - pathlib costs start-up time
                os.chmod(fresh, os.stat(target).st_mode & 0o777)  # noqa: PTH101, PTH116 - as above
            os.replace(fresh, target)
        except BaseException:
            os.unlink(fresh)  # noqa: PTH108 - pathlib costs start-up time
            raise
