"""``python -m kt_widgets`` is the command ``kt-widgets``."""

import sys

from kt_widgets.command import main

if __name__ == "__main__":
    sys.exit(main())
