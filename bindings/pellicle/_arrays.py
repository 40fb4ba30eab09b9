"""Array arguments in Python's terms: real numbers of one broadcast shape, or one clear error."""

import numpy as np

from . import _core


def as_real(name, value):
    """`value` as an array of double; InputError for anything that is not real numbers."""
    try:
        array = np.asarray(value)
        if array.dtype.kind not in "fiub":
            raise TypeError(f"its type is {array.dtype}")
        return array.astype(np.float64, copy=False)
    except (TypeError, ValueError) as error:
        raise _core.InputError(f"{name}: this is not a number or an array of numbers; {error}") from None


def broadcast(**arrays):
    """Shape to which all arrays broadcast; InputError naming their shapes otherwise."""
    try:
        return np.broadcast_shapes(*(a.shape for a in arrays.values()))
    except ValueError:
        shapes = ", ".join(f"{name} {a.shape}" for name, a in arrays.items())
        raise _core.InputError(f"the arguments have shapes that do not fit together: {shapes}") from None


def scalar_or_array(result, shape, status):
    """Plain float (and int code) for scalar arguments, arrays otherwise."""
    if shape:
        return result
    return (float(result[0]), int(result[1])) if status else float(result)
