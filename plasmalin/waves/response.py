from typing import Any
Reduced=Any
reduced=None
