"""``python -m whitefringe``."""

import sys

from .cli import main

sys.exit(main())
