"""The version, as it stands in every answer; pyproject.toml says the same, and a test holds them together."""

from typing import Final

VERSION: Final = "0.1.0"
ENGINE: Final = f"halfturn {VERSION}"
