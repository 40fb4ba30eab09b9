"""The examples in the docstrings of every public name."""

import doctest
import inspect

import pytest

import pellicle


def documented():
    """(name, docstring) of the package, its public names and the members of its classes."""
    yield "pellicle", pellicle.__doc__
    for name in pellicle.__all__:
        thing = getattr(pellicle, name)
        if name == "__version__":
            continue
        yield name, inspect.getdoc(thing)
        if inspect.isclass(thing):
            for member, value in vars(thing).items():
                if not member.startswith("_") and value.__doc__:
                    yield f"{name}.{member}", inspect.cleandoc(value.__doc__)


DOCSTRINGS = dict(documented())
FUNCTIONS = [name for name in pellicle.__all__ if inspect.isroutine(getattr(pellicle, name))]


@pytest.mark.parametrize("name", [name for name, text in DOCSTRINGS.items() if ">>>" in text])
def test_examples(name):
    test = doctest.DocTestParser().get_doctest(DOCSTRINGS[name], {}, name, None, 0)
    report = []
    result = doctest.DocTestRunner(optionflags=doctest.ELLIPSIS).run(test, out=report.append)
    assert result.attempted > 0
    assert result.failed == 0, "".join(report)


@pytest.mark.parametrize("name", FUNCTIONS)
def test_every_function_shows_an_example(name):
    assert ">>>" in DOCSTRINGS[name]


@pytest.mark.parametrize("name", FUNCTIONS)
def test_every_function_says_what_it_raises(name):
    assert "Raises" in DOCSTRINGS[name] or name == "catalogue"  # which reads nothing and cannot fail
