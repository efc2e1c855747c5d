"""`python -m ratebased.command`."""
import sys

from . import main

sys.exit(main())
