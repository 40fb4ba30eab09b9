"""README: its commands, its Python and its C++ give the output that stands beside them, and its tables are complete.

`python -m pytest tests/python/test_readme.py --rewrite-readme` puts the present output of the commands in place; the
difference is then for a person to judge.
"""

import collections
import doctest
import json
import os
import re
import shutil
import subprocess

import pytest

import pellicle

Block = collections.namedtuple("Block", "kind file text line")
FENCE = re.compile(r"^```(\w+)(?: (\S+))?\n(.*?)^```$", re.MULTILINE | re.DOTALL)
END_OF_OUTPUT = "\x1e"


def blocks_of(text):
    return [Block(m[1], m[2], m[3], text[:m.start()].count("\n") + 1) for m in FENCE.finditer(text)]


@pytest.fixture(scope="module")
def readme(root):
    return (root / "README.md").read_text(encoding="utf-8")


@pytest.fixture(scope="module")
def blocks(readme):
    found = collections.defaultdict(list)
    for block in blocks_of(readme):
        found[block.kind].append(block)
    return found


@pytest.fixture
def folder(root, tmp_path):
    """A folder as a reader has it: the examples and nothing else."""
    shutil.copytree(root / "examples", tmp_path / "examples")
    return tmp_path


def commands_of(block):
    """The commands of a console block; a line that ends in a backslash goes on in the next one."""
    commands, open_ended = [], False
    for line in block.text.splitlines():
        if open_ended:
            commands[-1] += "\n" + line
        elif line.startswith("$ "):
            commands.append(line[2:])
        else:
            continue
        open_ended = line.endswith("\\")
    return commands


def session(block, folder, command):
    """The block as a terminal shows it when its commands are typed, and the exit code of each."""
    commands = commands_of(block)
    script = "".join(f"{c}\nstatus=$?; printf '{END_OF_OUTPUT}%s{END_OF_OUTPUT}' $status; (exit $status)\n" for c in commands)
    environment = {**os.environ, "PATH": f"{command.parent}{os.pathsep}{os.environ['PATH']}", "LC_ALL": "C.UTF-8"}
    shown = subprocess.run(["bash", "-c", script], cwd=folder, env=environment, stdout=subprocess.PIPE,
                           stderr=subprocess.STDOUT, encoding="utf-8", timeout=120, check=False).stdout
    parts = shown.split(END_OF_OUTPUT)
    outputs, codes = parts[0:-1:2], [int(code) for code in parts[1::2]]
    assert len(outputs) == len(codes) == len(commands)
    return "".join(f"$ {c}\n{output}" for c, output in zip(commands, outputs, strict=True)), codes


def test_commands_print_what_the_readme_shows(root, readme, blocks, folder, command, pytestconfig):
    assert blocks["console"], "README shows no command"
    rewritten = readme
    differing = []
    for block in blocks["console"]:
        commands = commands_of(block)
        assert commands, f"README.md:{block.line}: a console block without a command"
        shown, codes = session(block, folder, command)
        for i, code in enumerate(codes):
            expected_to_fail = i + 1 < len(commands) and commands[i + 1] == "echo $?"
            assert code == 0 or expected_to_fail, f"README.md:{block.line}: {commands[i]} ends with {code}\n{shown}"
        if shown != block.text:
            rewritten = rewritten.replace(f"```console\n{block.text}```", f"```console\n{shown}```", 1)
            differing.append(f"README.md:{block.line} shows\n{block.text}but the output is\n{shown}")
    if pytestconfig.getoption("rewrite_readme"):
        (root / "README.md").write_text(rewritten, encoding="utf-8")
    else:
        assert not differing, "\n".join(differing)


def test_python_prints_what_the_readme_shows(blocks, folder, monkeypatch):
    assert blocks["python"], "README shows no Python"
    monkeypatch.chdir(folder)
    for block in blocks["python"]:
        report = []
        example = doctest.DocTestParser().get_doctest(block.text, {}, f"README.md:{block.line}", "README.md", block.line)
        result = doctest.DocTestRunner().run(example, out=report.append)
        assert result.attempted > 0 and result.failed == 0, "".join(report)


def test_cpp_prints_what_the_readme_shows(root, blocks, folder, command):
    assert blocks["cpp"], "README shows no C++"
    library = command.parent.parent / "lib" / "libpellicle.a"
    if not library.is_file():
        pytest.skip("no libpellicle.a beside the command; set PELLICLE_COMMAND to the command of a build folder")
    for block in blocks["cpp"]:
        (folder / "main.cpp").write_text(block.text, encoding="utf-8")
        subprocess.run(["g++", "-std=c++20", f"-I{root / 'lib/include'}", "main.cpp", library, "-lcsv", "-lmd", "-pthread",
                        "-o", "app"], cwd=folder, check=True, timeout=300)
        shown = subprocess.run([folder / "app"], capture_output=True, encoding="utf-8", check=True, timeout=60).stdout
        assert shown.splitlines() == re.findall(r"// prints (.*)", block.text)


def test_files_shown_are_the_files(root, blocks):
    shown = [b for kind in blocks.values() for b in kind if b.file]
    assert shown, "README shows no input file"
    for block in shown:
        assert block.text in (root / block.file).read_text(encoding="utf-8"), f"README.md:{block.line}: {block.file} differs"


def test_set_up_commands_exist(root, blocks):
    lines = [line for block in blocks["sh"] for line in block.text.splitlines()]
    scripts = [line.split()[0] for line in lines if not line.startswith(("python3 ", "venv/", "pellicle "))]
    assert {"examples/quickstart", "tests/run"} <= set(scripts)
    for script in scripts:
        assert os.access(root / script, os.X_OK), script


# ---- the tables name everything there is


def quoted_words(text):
    return set(re.findall(r"`\[*\"?([A-Za-z0-9_*/.]+)\"?\]*`", text))


def section(text, begin, end):
    return text[text.index(begin):text.index(end)]


def test_every_key_of_a_run_file_is_described(root, readme):
    source = (root / "lib/src/io/run_file.cpp").read_text(encoding="utf-8")
    lists = re.findall(r"(?:allow\(|key : )\{(.*?)\}", source, re.DOTALL)
    keys = {key for names in lists for key in re.findall(r'"([a-z_0-9]+)"', names)}
    run = (root / "lib/src/job/run.cpp").read_text(encoding="utf-8")
    keys |= set(re.findall(r'"([a-z_]+)"', re.search(r"record_keys\(\) \{.*?\};", run, re.DOTALL)[0]))
    assert len(keys) > 30
    described = quoted_words(section(readme, "\n## The run file", "\n### The area table"))
    described = {part for word in described for part in word.split(".")}
    assert keys - described == set()
    values = {"asymmetry", "counts", "arbitrary", "substrate", "raw", "corrected", "long", "wide", "computed", "ratio", "across", "analyser", "atomic", "elemental",
              "transmission", "reference", "sensitivities", "automatic", "gum", "adaptive", "true", "false", "area",
              "tilt_deg"}  # a column; the geometry keys name it
    assert {w for w in described if re.fullmatch("[a-z][a-z_0-9]*", w)} - keys <= values


def test_every_column_of_an_area_table_is_described(root, readme):
    source = (root / "lib/src/io/area_table.cpp").read_text(encoding="utf-8")
    columns = re.findall(r'"([a-z_]+)"', re.search(r"names = \{(.*?)\};", source, re.DOTALL)[1])
    table = section(readme, "\n### The area table", "\n## Results")
    assert sorted(re.findall(r"^\| `([a-z_]+)` \|", table, re.MULTILINE)) == sorted(columns)


def test_every_finding_is_described(root, readme):
    codes = set()
    for path in (root / "lib/src").rglob("*.?pp"):
        text = path.read_text(encoding="utf-8")
        codes |= set(re.findall(r'\{"([a-z_]+)",[^"{};]*Severity::', text))
        for pair in re.findall(r'\{[\w.]+ \? "([a-z_]+)" : "([a-z_]+)",\s*Severity::', text):
            codes |= set(pair)
    table = section(readme, "\nFindings:\n", "\n## What it does not do")
    assert set(re.findall(r"`([a-z_]+)`", table)) == codes


def field_names(value, but=("inputs",)):
    """Names of the fields of a JSON document, at any depth; names that are data (models, layers) excepted."""
    data = {"imfp_nm", "attenuation_models_nm", "refusals"}
    if isinstance(value, list):
        return set().union(*(field_names(v) for v in value)) if value else set()
    if not isinstance(value, dict):
        return set()
    names = set(value)
    for key, inner in value.items():
        if key not in but and not (key in data and isinstance(inner, dict)):
            names |= field_names(inner)
    return names


@pytest.mark.parametrize("arguments", [
    ["thickness", "examples/coupon-07.toml"], ["check", "examples/coupon-07.toml"],
    ["lengths", "--material", "SiO2", "--energy-ev", "1000"], ["lengths", "--sets"], ["materials", "Si"],
    ["lines", "Si", "--source", "Al Ka"], ["lines", "--sources"],
], ids=" ".join)
def test_every_json_field_is_described(readme, pellicle_command, folder, arguments):
    document = json.loads(pellicle_command(*arguments, "--json", folder=folder).stdout)
    assert field_names(document) - quoted_words(section(readme, "\n## Results", "\n## What it does not do")) == set()


def test_every_command_is_described(readme, pellicle_command):
    listed = set(re.findall(r"^  ([a-z]+)  ", pellicle_command("--help").stdout.split("Subcommands:")[1], re.MULTILINE))
    assert listed == set(re.findall(r"^\| `pellicle ([a-z]+)` \|", readme, re.MULTILINE))


def test_every_photon_source_is_named(readme, pellicle_command):
    names = [row["name"] for row in json.loads(pellicle_command("lines", "--sources", "--json").stdout)["results"]]
    assert all(f'`"{name}"`' in readme for name in names)


def test_the_default_length_lies_where_the_readme_says():
    # "default length in SiO2, 1387 eV: within 2 % of the calibrated lengths, states 10 %"
    length = pellicle.attenuation_length("SiO2", 1387.1)
    for calibrated in (3.448, 3.485):
        assert abs(length.value_nm / calibrated - 1.0) < 0.0225
    assert length.standard_uncertainty_nm / length.value_nm == pytest.approx(0.10, abs=0.005)
