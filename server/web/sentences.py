"""An error's own words, written as a sentence for a page."""


def sentence_of(error: Exception) -> str:
    """The words of an error with a capital letter and a full stop."""
    words = str(error)
    return words[:1].upper() + words[1:] + ("" if words.endswith((".", "!", "?")) else ".")
