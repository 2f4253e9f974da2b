"""Plan files: JSON text to plan and back, and saving so that the old file survives every failure."""

from __future__ import annotations

import errno
import hashlib
import os
import re
import secrets
import stat
import time
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import Any

import simplejson

from solver.exact import ALLOWED_SIZE, TypedNumber, typed_number
from solver.plan import Plan
from solver.plandocument import UnreadableFile, plan_from_document, plan_to_document
from solver.reading import BadNumber, RepeatedKeys
from solver.review import PlanProblems, Problem

__all__ = [
    "SUFFIX",
    "CannotSave",
    "PlanProblems",
    "Problem",
    "UnreadableFile",
    "content_hash",
    "dump_plan",
    "exact_json",
    "parse_plan",
    "plan_from_document",
    "plan_to_document",
    "read_plan",
    "save_plan",
    "write_whole",
]

SUFFIX = ".crew.json"
PART = ".part"  # what is being written, beside the file whose place it will take
STALE = 600  # seconds after which nobody is writing it any more
LARGEST_FILE = 4_000_000  # bytes; twenty times a plan of a thousand categories, and read within 2 s
LINE_WIDTH = 110


class CannotSave(Exception):
    """Nothing was written and the old file stands; the message is one sentence for people."""


# reading


def read_plan(path: str | os.PathLike[str]) -> Plan:
    """The plan in the file at `path`.

    Raises UnreadableFile (missing, no file, too big, not text, not JSON, another format or version) and
    PlanProblems (every problem listed). The file is only ever read.
    """
    name = Path(path).name or str(path)
    try:
        return parse_plan(_bytes_of(Path(path), name))
    except UnreadableFile as refused:
        raise UnreadableFile(f"{name}: {refused}") from None


def _bytes_of(path: Path, name: str) -> bytes:
    try:
        about = path.stat()
        if stat.S_ISDIR(about.st_mode):
            raise UnreadableFile("This is a folder, not a plan file.")
        if not stat.S_ISREG(about.st_mode):
            raise UnreadableFile("This is not an ordinary file.")
        with path.open("rb") as file:
            return file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise UnreadableFile("There is no such file.") from None
    except PermissionError:
        raise UnreadableFile("You have no permission to read this file.") from None
    except (OSError, ValueError) as error:  # ValueError: a name with a zero byte in it
        raise UnreadableFile(f"The file cannot be read ({_reason(error)}).") from None


def parse_plan(text: str | bytes) -> Plan:
    """The plan written in `text`; raises as `read_plan` does."""
    return plan_from_document(exact_json(_decoded(text) if isinstance(text, bytes) else text))


def _decoded(raw: bytes) -> str:
    if len(raw) > LARGEST_FILE:
        raise UnreadableFile(f"It is larger than {LARGEST_FILE // 1_000_000} MB, too large for a plan.")
    if raw.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise UnreadableFile("It is written in UTF-16; a plan file is UTF-8 text.")
    if b"\0" in raw:
        raise UnreadableFile("It is not a text file, so it cannot be a plan.")
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        raise UnreadableFile(f"It is not UTF-8 text (line {line}), so it cannot be a plan.") from None


def exact_json(text: str) -> Any:
    """The value written in `text`, every number a TypedNumber and never a binary float.

    Numbers of unusable size, NaN and Infinity become a BadNumber, objects that repeat a key a
    RepeatedKeys: `plan_from_document` reports both with their place. Raises UnreadableFile with line and
    column where `text` is not JSON.
    """
    if len(text) > LARGEST_FILE:
        raise UnreadableFile(f"It is larger than {LARGEST_FILE // 1_000_000} MB, too large for a plan.")
    number = _NumberReader()
    try:
        return simplejson.loads(
            text.removeprefix("\ufeff"),
            parse_int=number,
            parse_float=number,
            parse_constant=_not_finite,
            allow_nan=True,  # hands NaN to parse_constant instead of stopping at it
            object_pairs_hook=_object,
        )
    except simplejson.JSONDecodeError as error:
        raise UnreadableFile(_what_is_wrong(text, error)) from None
    except RecursionError:
        raise UnreadableFile("It is nested too deeply to be a plan.") from None


class _NumberReader:
    """Numbers from their text; equal texts share one value, which keeps long lists small."""

    def __init__(self) -> None:
        self._known: dict[str, TypedNumber | BadNumber] = {}

    def __call__(self, text: str) -> TypedNumber | BadNumber:
        made = self._known.get(text)
        if made is None:
            shown = text if len(text) <= 40 else f"{text[:20]}... ({len(text):,} characters)"
            number = typed_number(text)
            made = BadNumber(shown, f"cannot be used; {ALLOWED_SIZE}") if number is None else number
            self._known[text] = made
        return made


def _not_finite(text: str) -> BadNumber:
    return BadNumber(text, "is not a number; allowed are finite numbers")


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    made = dict(pairs)
    if len(made) == len(pairs):
        return made
    seen: set[str] = set()
    repeated = {key: None for key, _ in pairs if key in seen or seen.add(key)}  # type: ignore[func-returns-value]
    marked = RepeatedKeys(made)
    marked.repeated = tuple(repeated)
    return marked


def _what_is_wrong(text: str, error: simplejson.JSONDecodeError) -> str:
    if not text.strip():
        return "It is empty."
    where = f"line {error.lineno}, column {error.colno}"
    if error.msg.startswith("Unterminated string"):
        return f"It is cut off or a quotation mark is missing: the text that starts at {where} does not end."
    if error.pos >= len(text.rstrip()):
        return f"It is cut off: it ends at {where} in the middle of the plan."
    if error.msg.startswith("Extra data"):
        return f"It goes on after the end of the plan ({where})."
    found = text[error.pos]
    shown = found if found.isprintable() else f"U+{ord(found):04X}"
    return f"It is not valid JSON: {shown} at {where} cannot stand there."


# writing


def dump_plan(plan: Plan) -> str:
    """The text of the plan file: one key a line, short lists and objects on one line."""
    text = _laid_out(plan_to_document(plan), 0) + "\n"
    return re.sub("[\ud800-\udfff]", lambda half: f"\\u{ord(half[0]):04x}", text)  # has no UTF-8 form


def _laid_out(value: Any, depth: int) -> str:
    short: str = simplejson.dumps(value, use_decimal=True, ensure_ascii=False)
    nested = isinstance(value, dict | list) and value
    if not nested or (depth > 0 and len(short) + 2 * depth <= LINE_WIDTH):
        return short
    inner = "\n" + "  " * (depth + 1)
    if isinstance(value, dict):
        lines = [
            f"{simplejson.dumps(k, ensure_ascii=False)}: {_laid_out(v, depth + 1)}" for k, v in value.items()
        ]
        return "{" + inner + ("," + inner).join(lines) + "\n" + "  " * depth + "}"
    lines = [_laid_out(entry, depth + 1) for entry in value]
    return "[" + inner + ("," + inner).join(lines) + "\n" + "  " * depth + "]"


def content_hash(plan: Plan) -> str:
    """SHA-256, in hexadecimal, of exactly the bytes `save_plan` writes for `plan`.

    So anyone can compare a printed page with a saved plan by the common checksum tools.
    """
    return hashlib.sha256(dump_plan(plan).encode("utf-8")).hexdigest()


def save_plan(plan: Plan, path: str | os.PathLike[str]) -> None:
    """Write `plan` to `path`, whole or not at all; raises CannotSave and leaves the old file alone."""
    write_whole(Path(path), dump_plan(plan).encode("utf-8"))


def write_whole(path: Path, content: bytes) -> None:
    """Replace the file at `path` by `content` in one step, keeping its permissions.

    The bytes go to a file beside it, reach the disk, and only then take its name. A link stays a link.
    Raises CannotSave; the old file is then as it was.
    """
    with _told_as_sentence(path):
        target = Path(os.path.realpath(path))
        mode = _mode_of(target)
        beside = target.with_name(f"{_stem(target)}{secrets.token_hex(6)}{PART}")
        try:
            _write_and_sync(beside, content, mode)
            os.replace(beside, target)
        except BaseException:
            with suppress(OSError):
                beside.unlink()
            raise
        _sync_folder(target.parent)
        _sweep(target)


def _stem(target: Path) -> str:
    return f".{target.name[:100]}."


def _sweep(target: Path) -> None:
    """Remove what killed programs left beside `target`; what is young may be in the making."""
    left = re.compile(re.escape(_stem(target)) + "[0-9a-f]{12}" + re.escape(PART))
    with suppress(OSError), os.scandir(target.parent) as entries:
        for entry in entries:
            if left.fullmatch(entry.name) and entry.stat().st_mtime < time.time() - STALE:
                os.unlink(entry.path)


def _mode_of(target: Path) -> int | None:
    """The permission bits of a file that may be replaced, None where there is no file yet."""
    try:
        about = target.stat()
    except FileNotFoundError:
        return None
    if stat.S_ISDIR(about.st_mode):
        raise IsADirectoryError
    if not about.st_mode & 0o222 or not os.access(target, os.W_OK):
        raise PermissionError("read-only")
    return stat.S_IMODE(about.st_mode)


def _write_and_sync(beside: Path, content: bytes, mode: int | None) -> None:
    flags = os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0)
    with os.fdopen(os.open(beside, flags, 0o666), "wb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())
    if mode is not None:
        os.chmod(beside, mode)


def _sync_folder(folder: Path) -> None:
    """Make the new name durable, where the system can: the plan is already whole either way."""
    with suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


@contextmanager
def _told_as_sentence(path: Path) -> Iterator[None]:
    name = path.name or str(path)
    try:
        yield
    except FileNotFoundError:
        raise CannotSave(f"{name} was not saved: the folder {path.parent} does not exist.") from None
    except IsADirectoryError:
        raise CannotSave(f"{name} was not saved: there is a folder of that name.") from None
    except PermissionError as error:
        why = "the file is read-only" if error.errno is None else "writing in this folder is not permitted"
        raise CannotSave(f"{name} was not saved: {why}. Choose another place with Save as.") from None
    except (OSError, ValueError) as error:
        raise CannotSave(
            f"{name} was not saved: {_reason(error)}. The file before it is unchanged."
        ) from None


_REASONS = {
    "ENOSPC": "the disk is full",
    "EDQUOT": "your share of the disk is full",
    "EROFS": "the disk is read-only",
}


def _reason(error: OSError | ValueError) -> str:
    if not isinstance(error, OSError):
        return "the name cannot be used for a file"
    code = errno.errorcode.get(error.errno or 0, "")
    return _REASONS.get(code, (error.strerror or "the system refused").lower())
