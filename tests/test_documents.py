"""JSON and files: everything comes back; what was damaged or is foreign is refused by name."""

import json
import pickle
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from test_objects import DOCUMENTS, LATTICE, OWN_ATOM, each_document

import fluxloom as fl

# One of each class; the others are written in the same way.
ONE_OF_EACH = {type(one): one for one in DOCUMENTS.values()}
each_class = pytest.mark.parametrize(
    "one", ONE_OF_EACH.values(), ids=[kind.__name__ for kind in ONE_OF_EACH]
)
DAMAGES = ["", "null", "-1", "1e999", "[", "}", '"', "true", "0", ",", "9" * 40, "\\ud800"]


@each_document
def test_json_round_trip(one: object) -> None:
    again = type(one).from_json(one.to_json())
    assert again == one
    assert again.to_json() == one.to_json()
    assert json.loads(one.to_json(), parse_constant=pytest.fail)


@each_document
def test_files_round_trip(one: object, tmp_path: Path) -> None:
    for path in (tmp_path / "one.json", str(tmp_path / "two \u00e9.json")):
        one.save(path)
        assert type(one).load(path) == one
    assert sorted(file.name for file in tmp_path.iterdir()) == ["one.json", "two \u00e9.json"]


@pytest.mark.parametrize("kind", ["bands", "wannier"])
def test_large_results_come_back(kind: str, tmp_path: Path) -> None:
    one = (
        LATTICE.bands(points=20_001)
        if kind == "bands"
        else LATTICE.wannier(points_per_site=4096, sites=8)
    )
    path = tmp_path / "large.json"
    one.save(path)
    assert path.stat().st_size > 1_000_000
    assert type(one).load(path) == one
    assert pickle.loads(pickle.dumps(one)) == one


@each_class
def test_saving_replaces_whole_files(one: object, tmp_path: Path) -> None:
    path = tmp_path / "one.json"
    path.write_text("what stood here before, longer than any document" * 1000)
    one.save(path)
    assert type(one).load(path) == one
    with pytest.raises(FileNotFoundError) as caught:
        one.save(tmp_path / "no such folder" / "one.json")
    assert caught.value.filename == str(tmp_path / "no such folder" / "one.json")
    with pytest.raises(OSError, match="directory"):
        one.save(tmp_path)
    assert [file.name for file in tmp_path.iterdir()] == ["one.json"]


@each_class
def test_faults_of_files_name_the_file(one: object, tmp_path: Path) -> None:
    path = tmp_path / "broken.json"
    path.write_text('{\n"format": 3,\n')
    with pytest.raises(fl.InputError, match=r"broken\.json") as caught:
        type(one).load(path)
    assert {fault.file for fault in caught.value.faults} == {"broken.json"}
    path.write_bytes(b'{"format": "\xff"}')
    with pytest.raises(fl.InputError, match="UTF-8") as caught:
        type(one).load(path)
    assert caught.value.code == "file.not_text"


@st.composite
def damaged(draw: st.DrawFn) -> tuple[type, str]:
    one = draw(st.sampled_from([*DOCUMENTS.values()]))
    text = one.to_json()
    for _ in range(draw(st.integers(1, 3))):
        start = draw(st.integers(0, len(text)))
        stop = start + draw(st.integers(0, 12))
        put = draw(
            st.one_of(
                st.sampled_from(DAMAGES),
                st.text(st.characters(exclude_categories=["Cs"]), max_size=4),
            )
        )
        text = text[:start] + put + text[stop:]
    return type(one), text


@given(damaged())
def test_damaged_documents_are_refused_or_read(case: tuple[type, str]) -> None:
    kind, text = case
    try:
        one = kind.from_json(text)
    except fl.InputError as error:
        assert error.code
        assert str(error)
        assert error.faults
        assert all(fault.line is None or fault.line >= 1 for fault in error.faults)
    else:
        assert type(one) is kind
        # What was let in must be fit for use.
        assert kind.from_json(one.to_json()) == one
        assert repr(one)


@given(st.text(st.characters(exclude_categories=["Cs"])), st.sampled_from([*ONE_OF_EACH]))
def test_texts_that_are_no_documents(text: str, kind: type) -> None:
    with pytest.raises(fl.InputError):
        kind.from_json(text)


def numbers_of(value: object) -> list[float]:
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        return [number for item in value for number in numbers_of(item)]
    return [value] if isinstance(value, float) else []


@each_class
@pytest.mark.parametrize("word", ["NaN", "Infinity", "-Infinity", "nan", "1e999"])
def test_json_holds_no_nan(one: object, word: str) -> None:
    document = json.loads(one.to_json())
    # Some of the numbers occur more than once; the first place will do.
    text = json.dumps(document).replace(str(numbers_of(document)[0]), word, 1)
    with pytest.raises(fl.InputError) as caught:
        type(one).from_json(text)
    assert caught.value.code.startswith("file.")


@each_class
def test_duplicate_keys_are_refused(one: object) -> None:
    document = json.loads(one.to_json())
    for key, value in document.items():
        # The same value again: even a repetition without a contradiction is a slip.
        text = json.dumps(document)[:-1] + f", {json.dumps(key)}: {json.dumps(value)}}}"
        with pytest.raises(fl.InputError) as caught:
            type(one).from_json(text)
        assert key in str(caught.value)


def test_duplicate_keys_inside_are_refused() -> None:
    text = OWN_ATOM.to_json().replace('"mass_u":', '"mass_u":{"value":41.0,"source":"x"},"mass_u":')
    with pytest.raises(fl.InputError, match="mass_u"):
        fl.Atom.from_json(text)


@each_class
def test_unknown_and_missing_keys_are_refused(one: object) -> None:
    document = json.loads(one.to_json())
    with pytest.raises(fl.InputError, match="novelty"):
        type(one).from_json(json.dumps({**document, "novelty": 1}))
    with pytest.raises(fl.InputError, match="format"):
        type(one).from_json(json.dumps({k: v for k, v in document.items() if k != "format"}))


@each_class
def test_documents_say_what_they_are(one: object) -> None:
    document = json.loads(one.to_json())
    assert list(document)[:2] == ["format", "version"]
    assert document["format"].startswith("fluxloom-")
    assert document["version"] == 1


def test_no_two_classes_share_a_format() -> None:
    formats = [json.loads(one.to_json()).get("format") for one in ONE_OF_EACH.values()]
    assert len(set(formats)) == len(formats)


@each_class
@pytest.mark.parametrize("version", [2, 4_000_000_000])
def test_a_future_version_is_refused_by_name(one: object, version: int) -> None:
    document = {**json.loads(one.to_json()), "version": version}
    with pytest.raises(
        fl.InputError, match=f"version.*{version}.*needs a newer Fluxloom"
    ) as caught:
        type(one).from_json(json.dumps(document))
    assert caught.value.code == "file.version_too_new"


@each_class
@pytest.mark.parametrize("version", [0, -1, 1.5, "1", None])
def test_a_version_that_never_was_is_refused(one: object, version: object) -> None:
    with pytest.raises(fl.InputError, match="version"):
        type(one).from_json(json.dumps({**json.loads(one.to_json()), "version": version}))


@each_class
def test_documents_of_another_class_are_refused(one: object) -> None:
    for other in DOCUMENTS.values():
        if type(other) is not type(one):
            with pytest.raises(fl.InputError) as caught:
                type(one).from_json(other.to_json())
            assert "fluxloom-" in str(caught.value)
            assert caught.value.code == "file.format"


@each_class
def test_documents_are_objects_not_lists(one: object) -> None:
    # The bare values in the right order would be read without their names.
    values = list(json.loads(one.to_json()).values())
    for text in (json.dumps(values), "null", "3", '"text"', "[]", "{}", "[" * 100_000, "[{" * 1000):
        with pytest.raises(fl.InputError):
            type(one).from_json(text)


@each_class
def test_a_text_is_asked_for(one: object) -> None:
    for wrong in (None, 3, one.to_json().encode(), json.loads(one.to_json())):
        with pytest.raises(TypeError):
            type(one).from_json(wrong)


@pytest.mark.parametrize(
    ("name", "changes"),
    [
        ("lattice", {"depth_er": -1.0}),
        ("lattice", {"axis": [0, 0, 0]}),
        ("raman", {"absorb": [1, 0, 0]}),
        ("clock", {"emit_wavelength_nm": 769.0}),
        ("atom", {"name": "40L"}),
        ("atom", {"own": {"mass_u": {"value": -1.0, "source": "x"}}}),
        ("bands", {"quasimomenta": [0.0]}),
        ("wannier", {"amplitude": [0.0]}),
        ("wannier", {"band": 99}),
        ("ribbon", {"sites": 0}),
        ("ribbon", {"sense": 2}),
        ("ribbon", {"target": "3/0"}),
        ("ribbon", {"closed": True}),
        ("near fraction", {"fraction": "0.375"}),
        ("solution", {"sense": 0}),
        ("solution", {"wavelength_nm": -1.0}),
    ],
)
def test_values_that_no_object_can_have(name: str, changes: dict[str, object]) -> None:
    document = {**json.loads(DOCUMENTS[name].to_json()), **changes}
    with pytest.raises(fl.InputError):
        type(DOCUMENTS[name]).from_json(json.dumps(document))
