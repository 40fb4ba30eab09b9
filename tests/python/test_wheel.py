"""What `pip install` brings: the module, the command and one version."""

import importlib.metadata
import pathlib
import re
import subprocess
import sys
import sysconfig

import pellicle

DISTRIBUTION = importlib.metadata.distribution("pellicle")
FILES = {pathlib.Path(DISTRIBUTION.locate_file(f)).resolve() for f in DISTRIBUTION.files}
SITE = pathlib.Path(sysconfig.get_path("platlib")).resolve()
INSTALLED_COMMAND = pathlib.Path(sysconfig.get_path("scripts")) / "pellicle"


def test_the_tests_use_the_installed_package():
    assert pathlib.Path(pellicle.__file__).resolve() in FILES


def test_the_distribution_carries_the_command():
    assert INSTALLED_COMMAND.resolve() in FILES
    shown = subprocess.run([INSTALLED_COMMAND, "--version"], capture_output=True, encoding="utf-8", check=True, timeout=60)
    assert shown.stdout == f"pellicle {pellicle.__version__}\n" and shown.stderr == ""


def test_one_version_everywhere(root, pellicle_command):
    declared = re.search(r"project\(pellicle VERSION ([0-9.]+)", (root / "CMakeLists.txt").read_text(encoding="utf-8"))[1]
    assert pellicle.__version__ == declared
    assert importlib.metadata.version("pellicle") == declared
    assert pellicle_command("--version").stdout == f"pellicle {declared}\n"


def test_the_changelog_knows_the_version(root):
    assert f"\n## {pellicle.__version__}" in (root / "CHANGELOG.md").read_text(encoding="utf-8")


def test_the_installed_command_gives_the_same_numbers(coupon):
    shown = subprocess.run([INSTALLED_COMMAND, "thickness", coupon, "--csv"], capture_output=True, encoding="utf-8", check=True,
                           timeout=60)
    first = shown.stdout.splitlines()[1].split(",")
    assert float(first[6]) == pellicle.thickness(coupon)["results"][0]["thickness_nm"]["value"]


def test_the_wheel_holds_nothing_but_the_package_and_the_command():
    folders = {path.relative_to(SITE).parts[0] for path in FILES - {INSTALLED_COMMAND.resolve()}}
    assert folders == {"pellicle", f"pellicle-{pellicle.__version__}.dist-info"}


def test_the_tables_are_compiled_in(tmp_path):
    # From an empty folder, with nothing but the interpreter's own path.
    shown = subprocess.run([sys.executable, "-I", "-c", "import pellicle; print(len(pellicle.catalogue()))"], cwd=tmp_path,
                           capture_output=True, encoding="utf-8", check=True, timeout=60)
    assert int(shown.stdout) >= 200


def test_only_numpy_is_needed_at_run_time():
    needed = [r for r in DISTRIBUTION.requires if "extra ==" not in r]
    assert [re.match(r"[A-Za-z0-9_-]+", r)[0] for r in needed] == ["numpy"]
