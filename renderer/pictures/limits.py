"""How large a picture may be. Checked against headers, before anything of that size is allocated."""

from __future__ import annotations

MAX_FILE_BYTES = 8 * 1024**3
MAX_SIDE = 65_536
MAX_PIXELS = 1 << 28  # 16,384 x 16,384
MAX_8_BIT_PIXELS = 1 << 27  # 16,384 x 8,192; the library that reads them refuses a little more by itself
MAX_CHANNELS = 1_024
MAX_HEADER_BYTES = 16 * 1024**2
MAX_DECODED_BYTES = 16 * 1024**3  # all channels together
