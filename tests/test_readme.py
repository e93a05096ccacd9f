"""The README's Python examples run, and print what it says; its Rust is a doc test."""

import doctest
import re
from pathlib import Path

ROOT = Path(__file__).parent.parent


def test_the_python_example_runs() -> None:
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    blocks = re.findall(r"```python\n(.*?)```", text, flags=re.DOTALL)
    assert blocks
    parser, runner = doctest.DocTestParser(), doctest.DocTestRunner()
    for place, block in enumerate(blocks):
        example = parser.get_doctest(block, {}, f"README block {place}", "README.md", 0)
        assert example.examples
        runner.run(example)
    assert runner.summarize(verbose=False).failed == 0


def test_what_a_check_prints_is_what_it_prints(capfd) -> None:
    from fluxloom.commands import main

    text = (ROOT / "README.md").read_text(encoding="utf-8")
    shown = re.findall(r"```console\n\$ fluxloom (check .*?)\n(.*?)```", text, flags=re.DOTALL)
    assert shown
    for command, printed in shown:
        main(command.split())
        out = capfd.readouterr().out
        assert [line.rstrip() for line in out.splitlines()] == [
            line.rstrip() for line in printed.splitlines()
        ]
