"""Calls a page's callbacks over its own HTTP door, without a browser: what one would send, and what comes back."""

from __future__ import annotations

import json
from typing import Any

HOST = "http://localhost"
WILD = ["ALL"]


def _id(text: str) -> Any:
    return json.loads(text) if text.startswith("{") else text


def _key(id_: Any, prop: str) -> str:
    text = json.dumps(id_, sort_keys=True, separators=(",", ":")) if isinstance(id_, dict) else id_
    return f"{text}.{prop}"


class Calls:
    """One page's callbacks, found by an output and an input they have."""

    def __init__(self, app: Any) -> None:
        self.app = app
        self.client = app.server.test_client()
        self.client.get("/", base_url=HOST)
        self.listed = self.client.get("/_dash-dependencies", base_url=HOST).get_json()

    def spec(self, output: str, trigger: str) -> Any:
        """The callback with ``output`` ("doc.data") and an input like ``trigger`` ("url.search", a part of its id)."""
        for one in self.listed:
            names = [part.split("@")[0] for part in one["output"].strip(".").split("...")]
            inputs = [f"{row['id']}.{row['property']}" for row in one["inputs"]]
            if output in names and any(trigger in name for name in inputs) and not one["clientside_function"]:
                return one
        raise LookupError(f"no callback from {trigger} to {output}")

    def fire(self, output: str, trigger: Any, prop: str, values: dict[str, Any]) -> dict[str, Any]:
        """Fire a callback: ``trigger`` is the id that changed, ``values`` maps "id.prop" to what the page holds.

        Of wildcard inputs only the one that changed is on the page. Gives {"id.prop": value} of all that changes.
        """
        part = trigger if isinstance(trigger, str) else f'"{trigger["kind"]}"'
        one = self.spec(output, part)
        body = {
            "output": one["output"],
            "outputs": self._outputs(one["output"]),
            "inputs": [self._filled(row, trigger, prop, values) for row in one["inputs"]],
            "state": [self._filled(row, trigger, prop, values) for row in one["state"]],
            "changedPropIds": [_key(trigger, prop)],
        }
        answer = self.client.post("/_dash-update-component", json=body, base_url=HOST)
        if answer.status_code == 204:
            return {}
        assert answer.status_code == 200, answer.status_code
        found = answer.get_json()
        changed = {
            f"{id_}.{name}": value for id_, props in found.get("response", {}).items() for name, value in props.items()
        }
        changed |= {
            f"{id_}.{name}": value
            for id_, props in (found.get("sideUpdate") or {}).items()
            for name, value in props.items()
        }
        return changed

    @staticmethod
    def _outputs(output: str) -> Any:
        parts = output.strip(".").split("...") if output.startswith("..") else [output]
        rows = [{"id": _id(part.rpartition(".")[0]), "property": part.rpartition(".")[2]} for part in parts]
        return rows if output.startswith("..") else rows[0]

    @staticmethod
    def _filled(row: Any, trigger: Any, prop: str, values: dict[str, Any]) -> Any:
        id_ = _id(row["id"])
        if not isinstance(id_, dict):
            return {"id": id_, "property": row["property"], "value": values.get(f"{id_}.{row['property']}")}
        fits = isinstance(trigger, dict) and id_.get("kind") == trigger.get("kind") and row["property"] == prop
        return [{"id": trigger, "property": prop, "value": values[_key(trigger, prop)]}] if fits else []
