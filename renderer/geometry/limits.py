"""How large a mesh may be. Checked against file headers, before anything of that size is allocated."""

from __future__ import annotations

MAX_FILE_BYTES = 2 * 1024**3  # of one mesh file, and of the buffers it names
MAX_VERTICES = 40_000_000
MAX_FACES = 40_000_000
MAX_PARTS = 100_000  # named nodes of one file
MAX_NODE_DEPTH = 256
MAX_HEADER_BYTES = 64 * 1024**2  # of the JSON of a glTF file, or the header of a PLY file
