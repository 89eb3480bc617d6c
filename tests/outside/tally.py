"""Counts what passed and what failed, prints each failure, ends with the count."""

import sys


class Tally:
    def __init__(self):
        self.passed = 0
        self.failed = 0

    def check(self, good, what):
        """One check; `what` says what was wrong where it fails."""
        if good:
            self.passed += 1
        else:
            self.failed += 1
            print(f"FAILED: {what}")

    def near(self, found, expected, tolerance, what):
        """A number that may be off by `tolerance`."""
        good = found is not None and abs(found - expected) <= tolerance
        self.check(good, f"{what}: {found!r} instead of {expected!r} (tolerance {tolerance:.1e})")

    def end(self):
        """Prints the count and ends the program."""
        print(f"{self.passed} passed, {self.failed} failed")
        sys.exit(1 if self.failed or not self.passed else 0)
