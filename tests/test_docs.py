"""What the pages show can be pasted, and what they list is what there is."""

import importlib.util
import re
import shlex
import shutil
import tomllib
from pathlib import Path

import click
import pytest
from click.testing import CliRunner
from matplotlib import pyplot

import strata
from strata.cli import COMMANDS
from strata.cli.group import group
from strata.inputs import load_limits, schema
from strata.inputs.tables import Table

ROOT = Path(__file__).parent.parent
DOCS = ROOT / "docs"
PAGES = [ROOT / "README.md", *sorted(DOCS.rglob("*.md"))]
HOW_TO = sorted((DOCS / "how-to").glob("*.md"))
REFERENCE = sorted((DOCS / "reference").glob("*.md"))

#: Long enough for the demo's plants to start, and short enough for a test.
YEARS, STEP_DAYS = "1.1", "10"


def name_of(page):
    return str(page.relative_to(ROOT))


def blocks(page):
    """Return the fenced blocks of a page: language and text, in order."""
    text = page.read_text(encoding="utf-8")
    return re.findall(r"^```(\w*)\n(.*?)^```", text, flags=re.M | re.S)


def commands_in(block):
    """Return the commands of strata in a block of shell."""
    lines = block.replace("\\\n", " ").splitlines()
    return [line for line in lines if line.startswith("strata ")]


def arguments_of(line):
    """Return the arguments of a command with its patterns replaced by files, cut short."""
    words = []
    for word in shlex.split(line)[1:]:
        found = sorted(map(str, Path().glob(word))) if "*" in word else [word]
        assert found, f"{word} finds no file"
        words += found
    command = group.get_command(click.Context(group), words[0])
    known = {option for parameter in command.params for option in parameter.opts}
    for option, value in (("--years", YEARS), ("--step-days", STEP_DAYS)):
        if option in known:
            words += [option, value]  # the last one of two counts
    return words


RUNNABLE = [
    page
    for page in PAGES
    if any(
        language == "python" or (language == "sh" and commands_in(text))
        for language, text in blocks(page)
    )
]


@pytest.fixture(scope="module")
def desk(tmp_path_factory):
    """Return a folder with the demo's files, and the commands run there so far."""
    folder = tmp_path_factory.mktemp("desk")
    shutil.copytree(strata.demo_files(), folder / "strata-demo")
    return folder, set()


@pytest.mark.parametrize("page", RUNNABLE, ids=name_of)
def test_what_a_page_shows_can_be_pasted(page, desk, monkeypatch):
    folder, run_before = desk
    monkeypatch.chdir(folder)
    pyplot.switch_backend("Agg")
    names = {}
    for language, text in blocks(page):
        if language == "sh":
            for line in commands_in(text):
                if line not in run_before:
                    result = CliRunner().invoke(group, arguments_of(line))
                    assert result.exit_code == 0, f"{line}\n{result.output}"
                    run_before.add(line)
        elif language == "python":
            short = re.sub(r"\byears=\d+", f"years={YEARS}, step_days={STEP_DAYS}", text)
            exec(compile(short, name_of(page), "exec"), names)
    pyplot.close("all")


def test_the_pages_meant_to_be_pasted_from_are_found():
    assert {ROOT / "README.md", DOCS / "reference/commands.md", *HOW_TO} <= set(RUNNABLE)


def test_an_example_stands_for_every_command():
    text = (DOCS / "reference/commands.md").read_text(encoding="utf-8")
    shown = {line.split()[1] for _, block in blocks(DOCS / "reference/commands.md")
             for line in commands_in(block)}  # fmt: skip
    assert shown == set(COMMANDS)
    assert set(re.findall(r"<!-- options: (\w+) -->", text)) == set(COMMANDS)


# Files shown --------------------------------------------------------------------------------


def test_toml_on_a_page_is_toml_and_the_limits_shown_are_a_limits_file(tmp_path):
    shown = [text for page in PAGES for language, text in blocks(page) if language == "toml"]
    documents = [tomllib.loads(text) for text in shown]
    whole = [text for text, found in zip(shown, documents, strict=True) if "limit" in found]
    assert whole
    for number, text in enumerate(whole):
        file = tmp_path / f"{number}.toml"
        file.write_text(text, encoding="utf-8")
        assert load_limits(file).note.startswith("Invented limits, no law")


# Tables that the program knows --------------------------------------------------------------


@pytest.fixture(scope="module")
def writer():
    """Return the script that writes the tables."""
    path = ROOT / "scripts" / "write_key_tables.py"
    spec = importlib.util.spec_from_file_location("write_key_tables", path)
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.mark.parametrize("page", REFERENCE, ids=name_of)
def test_the_tables_are_those_that_the_program_would_write(page, writer):
    text = page.read_text(encoding="utf-8")
    rerun = "run scripts/write_key_tables.py and say what a new key means"
    assert writer.rewritten(text) == text, rerun
    unsaid = [line for line in text.splitlines() if re.search(r"\|\s*\|$", line)]
    assert unsaid == [], rerun


def test_every_table_of_an_input_file_stands_on_one_page():
    tables = {
        name
        for name, one in vars(schema).items()
        if isinstance(one, type) and issubclass(one, Table) and one is not Table
    }
    texts = [page.read_text(encoding="utf-8") for page in REFERENCE]
    shown = [name for text in texts for name in re.findall(r"<!-- keys: (\w+) -->", text)]
    assert sorted(shown) == sorted(tables)


def test_a_new_key_and_a_changed_default_would_be_noticed(writer):
    page = (DOCS / "reference/plan-file.md").read_text(encoding="utf-8")
    row = next(line for line in page.splitlines() if line.startswith("| `gas_to`"))
    assert writer.rewritten(page.replace(row + "\n", "")) != page
    assert (
        writer.rewritten(page.replace(row, row.replace('`"product"` |', '`"vent"` |'))) == page
    )


# Links and the caution ----------------------------------------------------------------------


def anchors(page):
    """Return the names of the headings of a page, as links write them."""
    heads = re.findall(r"^#+ (.*)$", page.read_text(encoding="utf-8"), flags=re.M)
    return {re.sub(r"[^\w\- ]", "", head).strip().lower().replace(" ", "-") for head in heads}


@pytest.mark.parametrize("page", PAGES, ids=name_of)
def test_links_lead_somewhere(page):
    for link in re.findall(r"\]\(([^)\s]+)\)", page.read_text(encoding="utf-8")):
        if "://" in link:
            continue
        path, _, anchor = link.partition("#")
        target = (page.parent / path).resolve() if path else page
        assert target.is_file(), f"{link}: no such page"
        if anchor:
            assert anchor in anchors(target), f"{link}: no such heading"


def test_the_index_leads_to_every_page():
    index = (DOCS / "README.md").read_text(encoding="utf-8")
    listed = set(re.findall(r"\]\(([^)]+\.md)\)", index))
    there = {str(page.relative_to(DOCS)) for page in DOCS.rglob("*.md")} - {"README.md"}
    assert there <= listed


@pytest.mark.parametrize("page", HOW_TO, ids=name_of)
def test_a_page_of_how_to_carries_the_caution(page):
    first = page.read_text(encoding="utf-8").split("\n\n")[1]
    assert first.startswith("> Lakes of this kind can kill")
    assert "(../../README.md)" in first
