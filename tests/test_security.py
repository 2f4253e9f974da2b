"""What no source of the program may do: speak to a network, run text as code, hand text to a shell."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
SOURCES = sorted(
    path for house in ("solver", "desktop", "resources") for path in (ROOT / house).rglob("*.py")
)

NETWORK = {
    "aiohttp", "asyncio", "ftplib", "http", "httpx", "imaplib", "poplib", "requests", "smtplib", "socket",
    "socketserver", "ssl", "telnetlib", "urllib", "urllib3", "webbrowser", "xmlrpc",
}  # fmt: skip
QT_NETWORK = {"QtNetwork", "QtWebEngineCore", "QtWebEngineWidgets", "QtWebSockets", "QDesktopServices"}
TEXT_AS_CODE = {"pickle", "cPickle", "dill", "marshal", "shelve", "code", "codeop", "imp"}
FORBIDDEN_MODULES = NETWORK | TEXT_AS_CODE
FORBIDDEN_CALLS = {"eval", "exec", "compile", "__import__"}
SHELLS = {("os", "system"), ("os", "popen"), ("subprocess", "getoutput"), ("subprocess", "getstatusoutput")}


def findings(source: str) -> list[str]:
    return [what for node in ast.walk(ast.parse(source)) for what in _in_node(node)]


def _in_node(node: ast.AST) -> Iterator[str]:
    if isinstance(node, ast.Import):
        yield from (_module(alias.name) for alias in node.names)
    elif isinstance(node, ast.ImportFrom) and node.module:
        yield _module(node.module)
        yield from (f"imports {alias.name}" for alias in node.names if alias.name in QT_NETWORK)
    elif isinstance(node, ast.Attribute):
        if isinstance(node.value, ast.Name) and (node.value.id, node.attr) in SHELLS:
            yield f"uses {node.value.id}.{node.attr}"
        if node.attr in QT_NETWORK:
            yield f"uses {node.attr}"
    elif isinstance(node, ast.Call):
        if isinstance(node.func, ast.Name) and node.func.id in FORBIDDEN_CALLS:
            yield f"calls {node.func.id}"
        if any(word.arg == "shell" and not _is_false(word.value) for word in node.keywords):
            yield "gives a text to a shell"


def _module(name: str) -> str:
    parts = name.split(".")
    return f"imports {name}" if parts[0] in FORBIDDEN_MODULES or QT_NETWORK & set(parts) else ""


def _is_false(value: ast.expr) -> bool:
    return isinstance(value, ast.Constant) and value.value is False


@pytest.mark.parametrize("path", SOURCES, ids=lambda path: str(path.relative_to(ROOT)))
def test_no_source_speaks_to_a_network_or_runs_text(path: Path) -> None:
    assert [what for what in findings(path.read_text("utf-8")) if what] == []


@pytest.mark.parametrize(
    "source",
    [
        "import socket",
        "import urllib.request as r",
        "from http.client import HTTPConnection",
        "from PySide6.QtNetwork import QTcpSocket",
        "from PySide6 import QtNetwork",
        "from PySide6.QtGui import QDesktopServices",
        "import pickle",
        "eval('1')",
        "exec('x = 1')",
        "import os\nos.system('ls')",
        "import subprocess\nsubprocess.run('ls', shell=True)",
        "import subprocess\nsubprocess.run('ls', shell=yes)",
    ],
)
def test_the_search_finds_what_it_looks_for(source: str) -> None:
    assert [what for what in findings(source) if what]


def test_the_search_lets_the_rest_pass() -> None:
    assert [w for w in findings("import json\ndialog.exec()\nrun([x], shell=False)") if w] == []
    assert len(SOURCES) > 200
