"""The command ``knought``: thin over the library, one module a subcommand.

Exit codes: 0 done; 2 the input or the call is wrong (one message, no traceback); 1 a fault of
ours; 130 interrupted.
"""

from knought.cli.main import main

__all__ = ["main"]
