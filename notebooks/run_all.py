"""Run every notebook from top to bottom; notebooks are stored without outputs."""

import sys
from pathlib import Path

import nbformat
from nbclient import NotebookClient

for path in sorted(Path(__file__).parent.glob("*.ipynb")):
    notebook = nbformat.read(path, as_version=4)
    if any(cell.get("outputs") for cell in notebook.cells):
        sys.exit(f"{path.name} is stored with outputs; clear them")
    NotebookClient(notebook, timeout=120, kernel_name="python3").execute()
    print(f"{path.name}: ran from top to bottom")
