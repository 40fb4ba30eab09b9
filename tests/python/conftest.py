"""Fixtures of the Python tests, and the tally of rows compared with other libraries and calculations."""

import collections
import math
import os
import pathlib
import shutil
import subprocess
import sysconfig

import pytest

ROOT = pathlib.Path(__file__).resolve().parents[2]
COMPARED = pytest.StashKey[collections.Counter]()  # kind -> rows that agreed
REFUSED = pytest.StashKey[collections.Counter]()   # reason -> rows where pellicle gives no number


class Rows:
    """Compares many rows, counts them under one kind, and names the worst one when any is off."""

    def __init__(self, kind, compared, refused):
        self._kind, self._compared, self._refused = kind, compared, refused
        self._count = 0
        self._off = []

    def compare(self, what, actual, expected, *, relative=0.0, absolute=0.0):
        self._count += 1
        allowed = max(absolute, relative * abs(expected))
        distance = abs(actual - expected)
        if not distance <= allowed:  # also true for a NaN
            excess = distance / allowed if allowed > 0.0 else math.inf
            self._off.append((excess, f"{what}: {actual!r}, expected {expected!r} within {allowed:.3g}"))

    def refuse(self, reason):
        """Notes a row for which pellicle gives a reason instead of a number."""
        self._refused[f"{self._kind}: {reason}"] += 1

    def __enter__(self):
        return self

    def __exit__(self, kind, error, trace):
        __tracebackhide__ = True
        if error is not None:
            return
        assert self._count > 0, f"no row of {self._kind} was compared"
        if self._off:
            worst = max(self._off, key=lambda row: row[0])
            pytest.fail(f"{self._kind}: {len(self._off)} of {self._count} rows are off; the worst is {worst[1]}")
        self._compared[self._kind] += self._count


@pytest.fixture
def rows(pytestconfig):
    """Starts a set of comparisons: ``with rows("kind (source)") as r: r.compare(...)``."""
    return lambda kind: Rows(kind, pytestconfig.stash[COMPARED], pytestconfig.stash[REFUSED])


@pytest.fixture(scope="session")
def root():
    """The folder of the repository."""
    return ROOT


@pytest.fixture(scope="session")
def command():
    """The pellicle command: PELLICLE_COMMAND, else the one installed beside this interpreter."""
    path = os.environ.get("PELLICLE_COMMAND") or shutil.which("pellicle", path=sysconfig.get_path("scripts"))
    assert path and pathlib.Path(path).is_file(), "no pellicle command: install the package or set PELLICLE_COMMAND"
    return pathlib.Path(path).resolve()


@pytest.fixture(scope="session")
def pellicle_command(command):
    """Runs the command; standard output, standard error and the exit code come back apart."""

    def run(*arguments, folder=None, text=None):
        return subprocess.run([command, *map(str, arguments)], cwd=folder, input=text, capture_output=True,
                              encoding="utf-8", timeout=120, check=False)

    return run


@pytest.fixture
def coupon(tmp_path):
    """A copy of the demo: run file and area table in a folder of their own."""
    for name in ("coupon-07.toml", "coupon-07.csv"):
        shutil.copy(ROOT / "examples" / name, tmp_path / name)
    return tmp_path / "coupon-07.toml"


def pytest_addoption(parser):
    parser.addoption("--rewrite-readme", action="store_true", help="put the present output of its commands into README.md")


def pytest_configure(config):
    config.stash[COMPARED] = collections.Counter()
    config.stash[REFUSED] = collections.Counter()


def pytest_terminal_summary(terminalreporter, config):
    compared, refused = config.stash[COMPARED], config.stash[REFUSED]
    if not compared:
        return
    terminalreporter.section("rows compared with other libraries and independent calculations")
    for kind, count in sorted(compared.items()):
        terminalreporter.write_line(f"{count:7d}  {kind}")
    terminalreporter.write_line(f"{compared.total():7d}  in all")
    if refused:
        terminalreporter.write_line("rows without a number, and why")
        for reason, count in sorted(refused.items()):
            terminalreporter.write_line(f"{count:7d}  {reason}")
