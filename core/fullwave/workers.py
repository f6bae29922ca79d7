"""Threads that share out compiled work.

The library of linear algebra has threads of its own, which wait for each other busily: on a
machine with other work they cost many times what they bring. So whatever is large is compiled
here, lets go of the interpreter, and is shared out to these.
"""

from __future__ import annotations

import os
from typing import Final

WORKERS: Final = min(4, os.cpu_count() or 1)
"""Threads to share work out to."""
