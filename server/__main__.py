"""Lets `python -m server` run the commands."""

from server.cli import main

if __name__ == "__main__":
    main()
