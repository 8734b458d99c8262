"""Names folded so that case, space, hyphen and underscore do not matter."""

from __future__ import annotations


def fold(name: str) -> str:
    """The folded form of a name: compatibility characters unified, lower case, one hyphen for any run of blanks.

    >>> fold("PET  Film"), fold("FR_4")
    ('pet-film', 'fr-4')
    """
    text = name
    if not text.isascii():
        from unicodedata import normalize

        text = normalize("NFKC", text)
    return "-".join(text.casefold().replace("_", " ").replace("-", " ").split())


def grams(folded: str) -> set[str]:
    """The trigrams of a folded name, its ends marked."""
    marked = f"  {folded} "
    return {marked[i : i + 3] for i in range(len(marked) - 2)}
