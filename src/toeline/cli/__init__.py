"""The command line: one file a command, each loaded when it is called."""
