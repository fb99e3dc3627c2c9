"""The examples in docstrings run, and the documentation shows what README promises."""

import doctest
import importlib
import pkgutil
import re
from pathlib import Path

import pytest

import plasmalin

MODULES = [
    m.name
    for m in pkgutil.walk_packages(plasmalin.__path__, "plasmalin.")
    if not m.name.endswith("__main__")
]


@pytest.mark.parametrize("name", MODULES)
def test_docstring_examples(name):
    assert doctest.testmod(importlib.import_module(name), optionflags=doctest.ELLIPSIS).failed == 0


def test_readme_notebook_snippet_runs(monkeypatch):
    import matplotlib

    matplotlib.use("Agg")
    text = (Path(__file__).parents[1] / "README.md").read_text(encoding="utf-8")
    (snippet,) = re.findall(r"```python\n(.*?)```", text, re.DOTALL)
    names = {}
    exec(compile(snippet, "README.md", "exec"), names)
    assert names["roots"].shape == (2,)


def test_readme_has_exactly_two_commands():
    text = (Path(__file__).parents[1] / "README.md").read_text(encoding="utf-8")
    blocks = re.findall(r"```sh\n(.*?)```", text, re.DOTALL)
    assert [b.count("\n") for b in blocks] == [1, 1]


def test_public_names_are_documented():
    for name in plasmalin.__all__:
        assert getattr(plasmalin, name).__doc__, name
