"""What a run leaves behind: the registry of everything written, the file, the same in memory, and how to open it."""
