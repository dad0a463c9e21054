"""What the exit status of a command means."""

from enum import IntEnum


class ExitStatus(IntEnum):
    """0, 3 and 4 leave complete results, 1 and 130 what was done so far, 2 nothing."""

    DONE = 0
    RUN_FAILED = 1
    WRONG_USE = 2
    INCIDENT_FOUND = 3
    TEST_NOT_PASSED = 3
    RUNS_DIFFER = 4
    INTERRUPTED = 130
