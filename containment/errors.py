"""The errors that the package raises on purpose."""

__all__ = ["ContainmentError", "InputError", "NotComputableError"]


class ContainmentError(Exception):
    """Base of all errors that the package raises on purpose."""


class InputError(ContainmentError, ValueError):
    """An input cannot be used; the text names the input, its value and what is allowed."""


class NotComputableError(ContainmentError, ArithmeticError):
    """The inputs are valid, but the result cannot be computed for them; the text says why."""
