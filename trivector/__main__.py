"""``python -m trivector``."""

import sys

from trivector.cli import main

sys.exit(main())
