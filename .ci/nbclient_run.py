"""Runs notebooks through the installed ampturn kernel with nbclient; fails on an error output or an empty cell."""
import sys

import nbformat
from nbclient import NotebookClient

for path in sys.argv[1:]:
    book = nbformat.read(path, as_version=4)
    NotebookClient(book, kernel_name="ampturn", timeout=120, resources={"metadata": {"path": "notebooks-examples"}}).execute()
    code = [c for c in book.cells if c.cell_type == "code"]
    errors = [o for c in code for o in c.outputs if o.output_type == "error"]
    pictures = sum("image/svg+xml" in o.get("data", {}) for c in code for o in c.outputs)
    if errors or not any(c.outputs for c in code):
        sys.exit(f"{path}: {errors}")
    nbformat.validate(book)
    print(f"{path}: {len(code)} cells, {pictures} pictures")
