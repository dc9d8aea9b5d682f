"""A wearer's sheet read as text: its headings with the lines under them, its cells, and what is not a name."""

from html.parser import HTMLParser

NAMES = ("letterhead", "who", "foot")  # names, contacts, dates and references
LABELLED = "block-chosen"  # what the shop calls its goods, after a colon


class Text(HTMLParser):
    """Reads a page: headings with the lines under them, cells, and all words but those of drawings and hidden parts."""

    def __init__(self) -> None:
        super().__init__()
        self.sections: dict[str, list[str]] = {}
        self.blocks: list[str] = []
        self.symbols: dict[str, str] = {}
        self.words: list[str] = []
        self._hidden: list[str] = []
        self._named: list[str] = []
        self._part = ""
        self._list = ""
        self._block: list[str] | None = None

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        kind = dict(attrs).get("class") or ""
        if tag in ("style", "title", "head") or kind == "foot":
            self._hidden.append(tag)
        if kind in NAMES or (self._named and tag == self._named[0]):
            self._named.append(tag)
        if tag == "section":
            self._part = kind
        if tag == "ul":
            self._list = kind.split()[0]
        if tag in ("h1", "h2", "li", "p", "th", "td"):
            self._block = []

    def handle_endtag(self, tag: str) -> None:
        if self._hidden and self._hidden[-1] == tag:
            self._hidden.pop()
        if tag in ("h1", "h2", "li", "p", "th", "td") and self._block is not None:
            self._end(tag, " ".join("".join(self._block).split()))
            self._block = None
        if self._named and self._named[-1] == tag:
            self._named.pop()

    def _end(self, tag: str, text: str) -> None:
        if tag == "h2":
            self.sections[text] = []
        if tag == "li":
            self.sections[list(self.sections)[-1]].append(text)
            self.symbols[text] = self._list
        if text and not self._named and not self._hidden:
            own = LABELLED in self._part and tag == "li" and ": " in text
            self.blocks.append(text.partition(": ")[0] if own else text)

    def handle_data(self, data: str) -> None:
        if self._hidden:
            return
        if self._block is not None:
            self._block.append(data)
        self.words.append(data)

    @property
    def text(self) -> str:
        return " ".join(" ".join(self.words).split())


def read(html: str) -> Text:
    """Return a page as text."""
    reader = Text()
    reader.feed(html)
    return reader
