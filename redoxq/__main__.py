"""`python -m redoxq` is the command `redoxq`."""

import sys

from redoxq.cli import main

sys.exit(main())
