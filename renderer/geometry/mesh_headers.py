"""A look at a PLY, STL or OBJ file's header before it is read: is it what it says, whole, and not too large."""

from __future__ import annotations

import re
import struct
from pathlib import Path
from typing import BinaryIO

from renderer.base.errors import Fault, InputError
from renderer.geometry.limits import MAX_FACES, MAX_FILE_BYTES, MAX_HEADER_BYTES, MAX_VERTICES

STL_HEADER_BYTES = 84
STL_FACE_BYTES = 50
PLY_WIDTHS = {
    **dict.fromkeys(("char", "uchar", "int8", "uint8"), 1),
    **dict.fromkeys(("short", "ushort", "int16", "uint16"), 2),
    **dict.fromkeys(("int", "uint", "int32", "uint32", "float", "float32"), 4),
    **dict.fromkeys(("double", "float64"), 8),
}


def refuse(path: Path, what: str, expected: str = "") -> InputError:
    """The error about a mesh file."""
    return InputError(Fault(what, str(path), expected))


def check_size(path: Path) -> int:
    """The file's size in bytes; an `InputError` when it is missing, empty or too large."""
    try:
        if not path.is_file():
            raise refuse(path, "the mesh file does not exist" if not path.exists() else "the mesh is not a file")
        size = path.stat().st_size
    except OSError as error:
        raise refuse(path, f"the mesh file cannot be read ({error.strerror})") from error
    if size == 0:
        raise refuse(path, "the mesh file is empty")
    if size > MAX_FILE_BYTES:
        raise refuse(path, f"the mesh file has {size / 1e9:.1f} GB", f"at most {MAX_FILE_BYTES / 1e9:.1f} GB")
    return size


def check_counts(path: Path, n_vertices: int, n_faces: int) -> None:
    """Refuse meshes beyond the limits, by the counts that a header states."""
    if n_vertices > MAX_VERTICES:
        raise refuse(path, f"the mesh states {n_vertices:,} vertices", f"at most {MAX_VERTICES:,}")
    if n_faces > MAX_FACES:
        raise refuse(path, f"the mesh states {n_faces:,} faces", f"at most {MAX_FACES:,}")


def ply_header(path: Path, stream: BinaryIO) -> list[str]:
    """The lines of a PLY header, up to but without end_header."""
    first = stream.readline(64).strip()
    if first != b"ply":
        raise refuse(path, "the file is not a PLY mesh", "a first line that says ply")
    lines: list[str] = []
    n_bytes = 0
    while True:
        raw = stream.readline(4096)
        n_bytes += len(raw)
        if not raw or n_bytes > MAX_HEADER_BYTES:
            raise refuse(path, "the PLY header has no end", "a line that says end_header")
        line = raw.decode("ascii", errors="replace").strip()
        if line == "end_header":
            return lines
        lines.append(line)


def ply_elements(path: Path, lines: list[str]) -> dict[str, tuple[int, list[list[str]]]]:
    """Each element's count and properties, (words of the line after "property")."""
    elements: dict[str, tuple[int, list[list[str]]]] = {}
    current = ""
    for line in lines:
        words = line.split()
        if words[:1] == ["element"]:
            if len(words) != 3 or not re.fullmatch(r"[0-9]{1,18}", words[2]):
                raise refuse(
                    path, f'the PLY header has a line that cannot be read, "{line[:60]}"', "element NAME COUNT"
                )
            current = words[1]
            elements[current] = (int(words[2]), [])
        elif words[:1] == ["property"]:
            types = words[2:4] if words[1:2] == ["list"] else words[1:2]
            if not current or len(words) not in (3, 5) or any(kind not in PLY_WIDTHS for kind in types):
                raise refuse(
                    path, f'the PLY header has a line that cannot be read, "{line[:60]}"', "property TYPE NAME"
                )
            elements[current][1].append(words[1:])
    return elements


def check_ply(path: Path, size: int) -> None:
    """Refuse a PLY file that cannot hold what its header states."""
    with path.open("rb") as stream:
        lines = ply_header(path, stream)
        start = stream.tell()
    elements = ply_elements(path, lines)
    n_vertices, properties = elements.get("vertex", (0, []))
    n_faces = elements.get("face", (0, []))[0]
    check_counts(path, n_vertices, n_faces)
    if n_vertices == 0 or n_faces == 0:
        raise refuse(path, f"the mesh has {n_vertices:,} vertices and {n_faces:,} faces", "at least one triangle")
    if not {"x", "y", "z"} <= {words[-1] for words in properties}:
        raise refuse(path, "the PLY vertices have no x, y and z", "properties x, y and z")
    ascii_file = any(line.split()[:2] == ["format", "ascii"] for line in lines)
    least = start
    for count, kinds in elements.values():
        width = sum(PLY_WIDTHS[words[1] if words[0] == "list" else words[0]] for words in kinds)
        least += count * (2 * len(kinds) if ascii_file else width)
    if size + 1 < least:
        raise refuse(path, f"the PLY file is cut short ({size:,} bytes)", f"at least {least:,} bytes by its header")


def check_stl(path: Path, size: int) -> bool:
    """Whether an STL file is binary; refuse one that is neither binary nor text."""
    with path.open("rb") as stream:
        head = stream.read(max(STL_HEADER_BYTES, 512))
    n_faces = struct.unpack("<I", head[80:84])[0] if len(head) >= STL_HEADER_BYTES else -1
    if n_faces >= 0 and size == STL_HEADER_BYTES + n_faces * STL_FACE_BYTES:
        check_counts(path, 3 * n_faces, n_faces)
        if n_faces == 0:
            raise refuse(path, "the mesh has no faces", "at least one triangle")
        return True
    if head.lstrip()[:5].lower() == b"solid" and b"\0" not in head:
        return False
    if n_faces < 0:
        raise refuse(
            path, f"the STL file is cut short ({size:,} bytes)", "at least 84 bytes, or text that starts with solid"
        )
    expected = STL_HEADER_BYTES + n_faces * STL_FACE_BYTES
    raise refuse(
        path,
        f"the STL file has {size:,} bytes",
        f"{expected:,} bytes, for the {n_faces:,} faces that its header states",
    )


def obj_faces(path: Path) -> int:
    """Number of lines that state a face in an OBJ file; refuse a file that has none."""
    n_faces = n_vertices = 0
    with path.open("rb") as stream:
        tail = b"\n"
        while block := stream.read(1 << 22):
            text = tail + block
            n_faces += text.count(b"\nf ") + text.count(b"\nf\t")
            n_vertices += text.count(b"\nv ") + text.count(b"\nv\t")
            tail = text[-2:]  # shorter than what is counted, so that nothing counts twice
    check_counts(path, n_vertices, n_faces)
    if n_faces == 0 or n_vertices == 0:
        raise refuse(path, f"the OBJ file has {n_vertices:,} vertices and {n_faces:,} faces", "at least one triangle")
    return n_faces
