"""``python -m renderer``: the command line, for where the `antisolar` command is not on the path."""

from renderer.cli import main

if __name__ == "__main__":
    main()
