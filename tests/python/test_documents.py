"""The documents beside README: links lead somewhere, keys are in the bibliography, named files exist."""

import re

import pytest

DOCUMENTS = ["README.md", "DEVELOPERS.md", "CHANGELOG.md", "reference/methods.md"]


@pytest.fixture(params=DOCUMENTS)
def document(request, root):
    return root / request.param


def test_links_lead_to_files(document):
    targets = re.findall(r"\]\(([^)#\s]+)\)", document.read_text(encoding="utf-8"))
    for target in targets:
        assert (document.parent / target).exists(), target


def test_keys_are_in_the_bibliography(root, document):
    known = set(re.findall(r"^@\w+\{([^,\s]+),", (root / "reference/sources.bib").read_text(encoding="utf-8"), re.MULTILINE))
    used = set(re.findall(r"\[([a-z]+\d{3,5}[a-z]*|xraydb|xraylib|periodictable)\]", document.read_text(encoding="utf-8")))
    assert used <= known


def test_named_files_exist(root, document):
    """`tests/…`, `lib/…`, `reference/…` and, for methods, `published/….csv` and `part/header`."""
    text = document.read_text(encoding="utf-8")
    for name in re.findall(r"`((?:tests|lib|reference|examples|published|cli|bindings)/[\w./*-]+)`", text):
        path = f"reference/{name}" if name.startswith("published/") else name
        assert list(root.glob(path.rstrip("/"))), name


def test_every_method_says_where_it_lives(root):
    text = (root / "reference/methods.md").read_text(encoding="utf-8")
    for lives in re.findall(r"^- Lives? in: (.*)$", text, re.MULTILINE):
        for name in re.findall(r"`([a-z]+/[a-z_0-9]+)(?:\.hpp)?`", lives.split("Checks:")[0]):
            headers = [root / f"lib/include/pellicle/{name}.hpp", root / f"lib/src/{name}.hpp"]
            assert any(header.is_file() for header in headers), name


def test_every_function_that_methods_name_exists(root):
    text = (root / "reference/methods.md").read_text(encoding="utf-8")
    headers = "".join(path.read_text(encoding="utf-8") for path in (root / "lib/include").rglob("*.hpp"))
    for name in re.findall(r"\(`([a-z_0-9]+)`", text):
        assert re.search(rf"\b{name}\(", headers), name


def test_every_check_table_guards_a_method(root):
    text = (root / "reference/methods.md").read_text(encoding="utf-8")
    for path in (root / "reference/published").glob("*.csv"):
        assert f"`published/{path.name}`" in text, path.name


def test_every_results_changed_is_answered(root):
    text = (root / "CHANGELOG.md").read_text(encoding="utf-8")
    for version in text.split("\n## ")[1:]:
        assert re.search(r"\n### Results changed\n\n\S", version), version.splitlines()[0]


def test_the_labels_of_developers_are_those_of_ctest(root):
    folders = {path.name for path in (root / "tests").iterdir() if path.is_dir() and list(path.glob("*_test.cpp"))}
    table = set(re.findall(r"^\| `([a-z]+)` \| `tests/", (root / "DEVELOPERS.md").read_text(encoding="utf-8"), re.MULTILINE))
    assert folders <= table
