"""Names and values as a first study file writes them."""

from __future__ import annotations

import json
import re
from collections.abc import Sequence


def fresh_name(word: str, taken: set[str]) -> str:
    """A name from letters, digits and _ that is not taken yet."""
    name = re.sub(r"[^A-Za-z0-9]+", "_", word).strip("_").lower() or "unnamed"
    number = 1
    while (fresh := name if number == 1 else f"{name}_{number}") in taken:
        number += 1
    taken.add(fresh)
    return fresh


def one_line(text: str) -> str:
    """Text on one line."""
    return " ".join("".join(sign if sign.isprintable() else " " for sign in text).split())


def yaml_text(text: str | None) -> str:
    """Text as YAML reads it back."""
    words = ("true", "false", "null", "yes", "no", "on", "off")
    plain = re.fullmatch(r"[A-Za-z_][A-Za-z0-9_./-]*", text or "") and (text or "").casefold() not in words
    return str(text) if plain else json.dumps(text or "", ensure_ascii=False)


def yaml_list(texts: Sequence[str]) -> str:
    """A list of texts on one line, as YAML reads it back."""
    return "[" + ", ".join(map(yaml_text, texts)) + "]"
