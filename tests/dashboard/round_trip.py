"""Server time of one changed value, every demo: ``python -m tests.dashboard.round_trip``. Prints, asserts nothing.

A change is three answers: the document takes the value, the first screen follows, then the rest of the page.
"""

from __future__ import annotations

import json
import statistics
import time
from pathlib import Path

from outcouple.fields import leaves
from outcouple_dashboard import create_app
from outcouple_dashboard.documents import document

from .calls import Calls

DEMOS = Path(__file__).parents[2] / "demo_configs"
CHANGES = 21


def numbers(app, text):
    """Ids and texts of changes: every decisive number, up by a few parts in a thousand each time."""
    design = app.desk.design(text)
    found = []
    for leaf in leaves(type(design.sections)):
        value = design.sections
        for key in leaf.path:
            value = getattr(value, key)
        if leaf.deciding and leaf.what == "quantity" and value:
            found.append((leaf, value))
    for at in range(CHANGES):
        leaf, value = found[at % len(found)]
        yield {"kind": "value", "path": "/".join(leaf.path)}, leaf.text(leaf.clip(value * (1.001 + 0.0007 * at)))


def key(id_):
    return json.dumps(id_, sort_keys=True, separators=(",", ":")) + ".value"


def main():
    app = create_app(DEMOS)
    calls = Calls(app)
    head = f"{'demo':34} {'value':>7} {'screen':>7} {'rest':>7}"
    print(f"{head} {'first screen: median':>21} {'p95':>5} {'all: median':>12} {'p95':>5}  (ms)")
    for file in sorted(DEMOS.glob("*.toml")):
        doc = document(file.read_text(encoding="utf-8"), file=file.name)
        app.desk.quick(doc["text"])
        rows = []
        for trigger, text in numbers(app, doc["text"]):
            page = {"doc.data": doc, "theme.data": "light", "shown-states.value": [], "tab.data": "bench"}
            start = time.perf_counter()
            new = calls.fire("doc.data", trigger, "value", {**page, key(trigger): text}).get("doc.data")
            changed = time.perf_counter()
            if new is None:
                continue
            page["doc.data"] = doc = new
            calls.fire("verdict.children", "doc", "data", page)
            screen = time.perf_counter()
            calls.fire("advice.children", "doc", "data", page)
            rows.append((changed - start, screen - changed, time.perf_counter() - screen))
        medians = [1e3 * statistics.median(row[at] for row in rows) for at in range(3)]
        first = sorted(1e3 * (row[0] + row[1]) for row in rows)
        whole = sorted(1e3 * sum(row) for row in rows)
        p95 = round(0.95 * (len(rows) - 1))
        print(
            f"{file.stem:34} {medians[0]:7.1f} {medians[1]:7.1f} {medians[2]:7.1f} "
            f"{statistics.median(first):21.1f} {first[p95]:5.0f} {statistics.median(whole):12.1f} {whole[p95]:5.0f}"
        )
    app.desk.jobs.close()


if __name__ == "__main__":
    main()
