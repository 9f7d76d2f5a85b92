"""``python -m mirrorlab``."""

import sys

from mirrorlab.command import main

sys.exit(main())
