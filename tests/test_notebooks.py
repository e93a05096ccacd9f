"""Every notebook runs from top to bottom, and its pictures come out."""

import base64
import os
import struct
from pathlib import Path

import nbformat
import pytest
from nbclient import NotebookClient
from nbformat import NotebookNode

FOLDER = Path(__file__).parent.parent / "notebooks-examples"
#: Pictures that a notebook promises.
PICTURES = {"atoms_in_light.ipynb": 6}


def read(name: str) -> NotebookNode:
    return nbformat.read(FOLDER / name, as_version=nbformat.NO_CONVERT)


def test_no_notebook_is_left_out() -> None:
    assert {path.name for path in FOLDER.glob("*.ipynb")} == set(PICTURES)


@pytest.mark.parametrize("name", PICTURES)
def test_what_is_kept_is_small_and_has_no_outputs(name: str) -> None:
    notebook = read(name)
    nbformat.validate(notebook)
    assert notebook.nbformat == 4 and notebook.nbformat_minor >= 5
    names = [cell.id for cell in notebook.cells]
    assert len(set(names)) == len(names)
    for cell in notebook.cells:
        if cell.cell_type == "code":
            assert cell.outputs == []
            assert cell.execution_count is None
    assert (FOLDER / name).stat().st_size < 60_000


@pytest.mark.parametrize("name", PICTURES)
def test_it_runs_and_draws(name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    # The kernel is the interpreter of the tests, whatever else is installed, and picks
    # its way of drawing by itself.
    monkeypatch.delenv("MPLBACKEND", raising=False)
    monkeypatch.setenv("IPYTHONDIR", str(tmp_path))
    monkeypatch.setenv("JUPYTER_DATA_DIR", str(tmp_path / "data"))
    monkeypatch.setenv("JUPYTER_RUNTIME_DIR", str(tmp_path / "run"))
    notebook = read(name)
    client = NotebookClient(
        notebook,
        timeout=60,
        kernel_name="python3",
        resources={"metadata": {"path": os.fspath(FOLDER)}},
    )
    client.execute()
    outputs = [out for cell in notebook.cells for out in cell.get("outputs", [])]
    assert not [out for out in outputs if out.output_type == "error"]
    pictures = [out.data["image/png"] for out in outputs if "image/png" in out.get("data", {})]
    assert len(pictures) == PICTURES[name]
    for picture in pictures:
        content = base64.b64decode(picture)
        width, height = struct.unpack(">II", content[16:24])
        # An empty picture of this size is a few kilobytes.
        assert width > 500 and height > 300 and len(content) > 10_000
    # What is not confirmed is said once, and nothing else is warned of.
    texts = [out.text for out in outputs if out.output_type == "stream" and out.name == "stderr"]
    warned = "".join(texts)
    assert warned.count("FluxloomWarning:") == warned.count("Warning:") == 1
