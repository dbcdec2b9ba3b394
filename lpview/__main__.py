"""``python -m lpview``."""

import sys

from lpview.cli import main

sys.exit(main())
