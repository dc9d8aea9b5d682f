"""The root of every error that a person is meant to read, and the marker of the sentences for them."""

from collections.abc import Mapping


def mark(text: str) -> str:
    """Mark a text for translation; the text itself is returned unchanged."""
    return text


class TwolightError(Exception):
    """A problem told in one sentence for a person; subclasses stand beside the code that raises them.

    ``text`` is the sentence, marked for translation, with places for ``figures``; the error as a string is the sentence
    in English. A class that has one reason keeps its text.
    """

    text: str = ""
    figures: Mapping[str, str | float]

    def __init__(self, text: str | None = None, **figures: str | float) -> None:
        self.text = self.text if text is None else text
        self.figures = figures
        shown = {name: f"{figure:g}" if isinstance(figure, float) else figure for name, figure in figures.items()}
        super().__init__(self.text % shown if shown else self.text)
