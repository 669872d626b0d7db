"""`python -m wavejig` is the command `wavejig`."""

import sys

from wavejig.cli import main

sys.exit(main())
