"""``python -m pla`` is the ``fuseplan`` command."""

from pla.cli.main import main

main()
