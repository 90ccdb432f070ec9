#!/usr/bin/env python3
"""Runs everything: `python3 manage.py start`, `python3 manage.py test`."""

# This file must be readable by any Python, so that an old one can say that it is too old.
import sys

if sys.version_info < (3, 11):
    sys.stderr.write(
        "Flosswright needs Python 3.11 or newer; this is %d.%d.\n" % tuple(sys.version_info[:2])
    )
    sys.exit(2)

from planner.bootstrap import run

if __name__ == "__main__":
    run(sys.argv)
