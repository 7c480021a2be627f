"""Runs notebooks through nbclient, a client that is not ours, and compares
what each code cell gives with what is stored in it."""

import sys
from pathlib import Path

import nbformat
from nbclient import NotebookClient


def outputs(cell):
    """The outputs of a cell without what only a front end adds. What they were
    made with (display.Provenance) may be another version here."""
    if any("application/vnd.levelsum.provenance+json" in o.get("data", {}) for o in cell.get("outputs", [])):
        return ["provenance"]
    return [{k: v for k, v in o.items() if k != "transient"} for o in cell.get("outputs", [])]


failed = 0
for name in sys.argv[1:]:
    path = Path(name).resolve()
    stored = nbformat.read(path, as_version=nbformat.NO_CONVERT)
    now = nbformat.read(path, as_version=nbformat.NO_CONVERT)
    for cell in now.cells:
        if cell.cell_type == "code":
            cell.outputs, cell.execution_count = [], None
    NotebookClient(now, timeout=300, resources={"metadata": {"path": str(path.parent)}}, record_timing=False).execute()
    cells = wrong = 0
    for i, (a, b) in enumerate(zip(stored.cells, now.cells), 1):
        if a.cell_type != "code":
            continue
        cells += 1
        if outputs(a) != outputs(b) or a.execution_count != b.execution_count:
            wrong += 1
            print(f"{name}: cell {i}: stored\n{outputs(a)}\nthrough nbclient\n{outputs(b)}")
    print(f"{name}: {cells} code cells through nbclient, {wrong} differ from what is stored")
    failed += wrong
sys.exit(failed > 0)
