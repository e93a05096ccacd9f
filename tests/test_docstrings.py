"""Everything public is described, and the examples in the descriptions are true."""

import doctest
import importlib
import inspect
import pkgutil
import re
from types import ModuleType

import pytest

import fluxloom as fl
from fluxloom import _core

PUBLIC = {name: getattr(fl, name) for name in fl.__all__ if name != "__version__"}
CLASSES = {name: one for name, one in PUBLIC.items() if isinstance(one, type)}
MODULES = {
    found.name: importlib.import_module(found.name)
    for found in pkgutil.walk_packages(fl.__path__, "fluxloom.")
    if found.name not in {"fluxloom._core", "fluxloom.__main__"}
}
MAIN = ["Apparatus", "Atom", "Lattice", "RamanPair"]
MAIN += [name for name, one in PUBLIC.items() if not isinstance(one, type)]
# Where setting something for the whole process would be the example.
MAIN = [name for name in MAIN if not name.startswith("set_")]


def members(one: type) -> dict[str, object]:
    """The public attributes and methods that a class adds itself."""
    return {name: member for name, member in vars(one).items() if not name.startswith("_")}


def documented() -> dict[str, str]:
    """Every docstring of the package that may hold examples, by its place."""
    texts = {"fluxloom": fl.__doc__ or ""}
    for name, one in {**PUBLIC, **public_of(_core)}.items():
        texts[name] = one.__doc__ or ""
        if isinstance(one, type):
            for member, value in members(one).items():
                texts[f"{name}.{member}"] = inspect.getdoc(value) or ""
    for place, module in MODULES.items():
        texts[place] = module.__doc__ or ""
        for name, value in vars(module).items():
            if getattr(value, "__module__", None) == place:
                texts[f"{place}.{name}"] = getattr(value, "__doc__", None) or ""
    return texts


def public_of(module: ModuleType) -> dict[str, object]:
    return {name: getattr(module, name) for name in dir(module) if not name.startswith("_")}


TEXTS = documented()
WITH_EXAMPLES = {place: text for place, text in TEXTS.items() if ">>> " in text}


@pytest.mark.parametrize("place", WITH_EXAMPLES)
def test_examples_are_true(place: str) -> None:
    report: list[str] = []
    example = doctest.DocTestParser().get_doctest(TEXTS[place], {}, place, None, 0)
    doctest.DocTestRunner().run(example, out=report.append)
    assert not report, "".join(report)


@pytest.mark.parametrize("name", MAIN)
def test_the_main_names_have_examples(name: str) -> None:
    assert ">>> import fluxloom as fl\n" in inspect.cleandoc(PUBLIC[name].__doc__)


def own_text(value: object) -> str:
    """What something says about itself; a plain value has only its type to speak for it."""
    return "" if value is None or isinstance(value, (str, int)) else inspect.getdoc(value) or ""


@pytest.mark.parametrize("name", PUBLIC)
def test_everything_public_is_described(name: str) -> None:
    one = PUBLIC[name]
    silent = [] if (one.__doc__ or "").strip() else [name]
    if isinstance(one, type):
        silent += [
            f"{name}.{member}"
            for member, value in members(one).items()
            # Fields of a dataclass are told of in the docstring of their class.
            if f"\n    {member} : " not in one.__doc__ and not own_text(value)
        ]
    assert silent == []


@pytest.mark.parametrize("name", public_of(_core))
def test_the_compiled_part_is_described_where_it_is_not_public(name: str) -> None:
    assert (public_of(_core)[name].__doc__ or "").strip()


@pytest.mark.parametrize("place", MODULES)
def test_modules_and_what_they_offer_are_described(place: str) -> None:
    module = MODULES[place]
    assert (module.__doc__ or "").strip()
    for name in getattr(module, "__all__", ()):
        value = getattr(module, name)
        if callable(value):
            assert (value.__doc__ or "").strip(), f"{place}.{name}"


@pytest.mark.parametrize("name", fl.__all__)
def test_exported_names_exist(name: str) -> None:
    assert hasattr(fl, name)


def test_exported_names_are_in_order_and_come_once() -> None:
    assert list(fl.__all__) == sorted(set(fl.__all__))


@pytest.mark.parametrize("name", CLASSES)
def test_classes_are_known_by_their_public_place(name: str) -> None:
    one = CLASSES[name]
    assert one.__qualname__ == name
    assert getattr(importlib.import_module(one.__module__), name) is one
    if hasattr(_core, name):
        assert one.__module__ == "fluxloom"


@pytest.mark.parametrize("place", TEXTS)
def test_descriptions_are_plain_text(place: str) -> None:
    text = TEXTS[place]
    # Square brackets of Rust's own links mean nothing to a reader of Python.
    assert not re.search(r"\[`[^`]+`\]", text)
    assert "\t" not in text


@pytest.mark.parametrize("name", [n for n, o in PUBLIC.items() if callable(o)])
def test_signatures_can_be_asked_for(name: str) -> None:
    one = PUBLIC[name]
    if isinstance(one, type) and issubclass(one, BaseException):
        return
    if isinstance(one, type) and one.__new__ is object.__new__:
        # Results are made by functions; building one by hand is refused.
        with pytest.raises(TypeError):
            one()
        return
    assert inspect.signature(one).parameters or name == "show_versions"
