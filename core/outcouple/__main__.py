"""``python -m outcouple``: the command line."""

from __future__ import annotations

from outcouple.cli import main

if __name__ == "__main__":
    main()
