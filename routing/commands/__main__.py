"""``python -m routing.commands``: the command line where the ``overcrest`` script is not on the search path."""

import sys

from routing.commands import main

sys.exit(main())
