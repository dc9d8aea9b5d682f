"""The root of every error that a person is meant to read."""


class TwolightError(Exception):
    """A problem whose text is one sentence for a person; subclasses stand beside the code that raises them."""
