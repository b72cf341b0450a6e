"""``python -m thermfix`` and the ``thermfix`` command."""

from thermfix.cli.main import main

if __name__ == "__main__":
    main()
