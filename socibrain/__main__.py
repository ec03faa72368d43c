"""``python -m socibrain`` is the command line."""

from socibrain.cli import main

if __name__ == "__main__":
    main()
