"""``python -m plasmalin`` is the command line."""

from .cli import main

raise SystemExit(main())
