"""Where a key stands in the text of a shot file; asked only when there is an error to report."""

from __future__ import annotations

from typing import Any

from renderer.shot.schema.flaws import Path

Place = tuple[int, int]  # line and column, from 1


class Places:
    """Line and column of every key, table and list entry of a text in TOML, by its path."""

    def __init__(self, lines: list[bytes], starts: dict[Path, tuple[int, int]]) -> None:
        self._lines = lines
        self._starts = starts  # row and byte within it, from 0

    def __contains__(self, path: Path) -> bool:
        return path in self._starts

    def __getitem__(self, path: Path) -> Place:
        row, byte = self._starts[path]
        before = self._lines[row][:byte].decode("utf-8", errors="replace")
        return row + 1, len(before) + 1


def positions(text: str) -> Places:
    """The places of everything in a text in TOML."""
    import tree_sitter
    import tree_sitter_toml

    parser = tree_sitter.Parser(tree_sitter.Language(tree_sitter_toml.language()))
    source = text.encode("utf-8")
    finder = _Finder()
    finder.document(parser.parse(source).root_node)
    return Places(source.split(b"\n"), finder.found)


class _Finder:
    """Walks the syntax tree; `found` grows by what it meets, the first of each path."""

    def __init__(self) -> None:
        self.found: dict[Path, tuple[int, int]] = {}
        self.counts: dict[Path, int] = {}  # of the tables in each list of tables

    def document(self, root: Any) -> None:
        """Everything in a text."""
        for node in root.named_children:
            if node.type == "pair":
                self.pair(node, ())
            elif node.type in ("table", "table_array_element"):
                self.table(node)

    def table(self, node: Any) -> None:
        """A [table] or one [[entry]] of a list of tables, with its pairs."""
        header = node.named_children[0] if node.named_children else None
        if header is None or header.type == "pair":
            return
        parts = self.parts(header)
        path: Path = ()
        for part in parts[:-1]:
            path = self.inside((*path, part))
        path = (*path, parts[-1])
        self.note(path, header)
        if node.type == "table_array_element":
            index = self.counts.get(path, 0)
            self.counts[path] = index + 1
            path = (*path, index)
            self.note(path, header)
        else:
            path = self.inside(path)
        for child in node.named_children[1:]:
            if child.type == "pair":
                self.pair(child, path)

    def inside(self, path: Path) -> Path:
        """`path`, or its last entry where it is a list of tables."""
        return (*path, self.counts[path] - 1) if path in self.counts else path

    def pair(self, node: Any, prefix: Path) -> None:
        """A key with its value."""
        if len(node.named_children) < 2:
            return
        key, value = node.named_children[0], node.named_children[1]
        path = prefix
        for part in self.parts(key):
            path = (*path, part)
            self.note(path, key)
        self.value(value, path)

    def value(self, node: Any, path: Path) -> None:
        """What is inside a list or a table in braces."""
        if node.type == "inline_table":
            for child in node.named_children:
                if child.type == "pair":
                    self.pair(child, path)
        elif node.type == "array":
            entries = [child for child in node.named_children if child.type not in ("comment", "ERROR")]
            for index, child in enumerate(entries):
                self.note((*path, index), child)
                self.value(child, (*path, index))

    def note(self, path: Path, node: Any) -> None:
        """Remember where a path stands."""
        self.found.setdefault(path, (node.start_point[0], node.start_point[1]))

    def parts(self, node: Any) -> list[str]:
        """The parts of a key: bare, quoted or dotted."""
        if node.type == "dotted_key":
            return [part for child in node.named_children for part in self.parts(child)]
        text = node.text.decode("utf-8", errors="replace")
        if node.type != "quoted_key":
            return [text]
        import tomllib

        return list(tomllib.loads(f"{text} = 0"))
