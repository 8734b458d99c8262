"""``python -m stackdb``."""

from stackdb.cli import main

main()
