"""``python -m knought``."""

from knought.cli import main

if __name__ == "__main__":
    raise SystemExit(main())
