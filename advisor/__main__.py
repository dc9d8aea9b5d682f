"""``python -m advisor`` is the ``twolight`` command."""

from advisor.cli import main

main()
