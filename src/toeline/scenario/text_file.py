"""Reading a text file, with a sentence for everything that can be wrong with it."""

from pathlib import Path


class UnreadableFileError(ValueError):
    """A file that is not there or is no text; `line` where one is known."""

    def __init__(self, message: str, line: int | None = None):
        self.line = line
        super().__init__(message)


def is_there(path: Path) -> bool:
    """Say whether there is such a file; a path that none can have leads to none."""
    try:
        return path.is_file()
    except OSError:
        return False


def read_text(path: Path) -> str:
    """Give the text of a UTF-8 file without a byte order mark. Raises UnreadableFileError."""
    try:
        content = path.read_bytes()
    except FileNotFoundError:
        raise UnreadableFileError("there is no such file") from None
    except IsADirectoryError:
        raise UnreadableFileError("this is a folder; a text file is needed") from None
    except (OSError, ValueError) as error:
        raise UnreadableFileError(f"the file cannot be read: {_reason(error)}") from None
    return _decoded(content)


def _reason(error: OSError | ValueError) -> str:
    return (getattr(error, "strerror", None) or str(error)).lower()


def _decoded(content: bytes) -> str:
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        message = f"byte 0x{content[error.start]:02x} is not UTF-8; save the file as UTF-8 text"
        raise UnreadableFileError(message, line) from None
    if not text.strip():
        raise UnreadableFileError("the file is empty")
    return text
