"""``python -m psdflow``."""

from psdflow.cli import main

main()
