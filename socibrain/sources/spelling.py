"""What two spellings of one name have in common."""

from __future__ import annotations

import unicodedata

_LETTERS = str.maketrans({"ø": "o", "ł": "l", "đ": "d", "ð": "d", "þ": "th", "æ": "ae", "œ": "oe", "ı": "i"})
"""Latin letters that Unicode does not take apart into a letter and an accent."""


def name_words(written: str) -> tuple[str, ...]:
    """The words of a name, without case, accents or punctuation; "Surname, Given" turned round.

    >>> name_words("Ångström,  Per-Olof")
    ('per', 'olof', 'angstrom')
    """
    parts = written.split(",")
    turned = f"{parts[1]} {parts[0]}" if len(parts) == 2 else written
    text = unicodedata.normalize("NFKD", unicodedata.normalize("NFKD", turned).casefold())
    kept, latin = [], False
    for letter in text.translate(_LETTERS):
        if unicodedata.combining(letter):
            kept.append("" if latin else letter)
        elif unicodedata.category(letter)[0] in "LNM":
            kept.append(letter)
            latin = unicodedata.name(letter, "").startswith("LATIN")
        else:
            kept.append("" if letter in "'’.`´" else " ")
    return tuple(unicodedata.normalize("NFC", "".join(kept)).split())


def name_key(written: str) -> str:
    """What two spellings of one name have in common; '' when no letter or digit is left.

    >>> name_key("O'Brien, Jean Luc") == name_key("jean-luc obrien")
    True
    """
    return "".join(name_words(written))
