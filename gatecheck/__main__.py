"""Lets `python -m gatecheck` do what the console command does."""

from gatecheck.cli import main

if __name__ == "__main__":
    raise SystemExit(main())
