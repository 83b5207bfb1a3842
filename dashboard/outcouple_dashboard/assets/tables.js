// Tables come as data on an element and are drawn here: one component each, however many cells they have.
"use strict";
(function () {
  function put(cell, content) {
    if (content === null || typeof content !== "object") {
      cell.textContent = content === null ? "" : String(content);
      return;
    }
    if (content.mark) {
      const mark = document.createElement("span");
      mark.className = "mark " + content.mark[2];
      const shape = document.createElement("span");
      shape.className = "shape";
      shape.setAttribute("aria-hidden", "true");
      shape.textContent = content.mark[0];
      mark.append(shape, content.mark[1]);
      cell.append(mark);
    }
    if (content.text) cell.append(content.text);
    if (content.title) cell.title = content.title;
  }

  function draw(place) {
    let given;
    try { given = JSON.parse(place.dataset.table); } catch (_) { return; }
    const table = document.createElement("table");
    const caption = document.createElement("caption");
    caption.className = "hidden-text";
    caption.textContent = given.caption;
    const head = document.createElement("tr");
    given.head.forEach(function (text) {
      const cell = document.createElement("th");
      cell.scope = "col";
      put(cell, text);
      head.append(cell);
    });
    const top = document.createElement("thead");
    top.append(head);
    const body = document.createElement("tbody");
    given.rows.forEach(function (row) {
      const line = document.createElement("tr");
      row.forEach(function (content, at) {
        const cell = document.createElement("td");
        if (given.numbers.includes(at)) cell.className = "number";
        put(cell, content);
        line.append(cell);
      });
      body.append(line);
    });
    table.append(caption, top, body);
    place.replaceChildren(table);
  }

  function look(changes) {
    changes.forEach(function (change) {
      if (change.type === "attributes") draw(change.target);
      change.addedNodes.forEach(function (node) {
        if (node.nodeType !== 1) return;
        if (node.dataset && node.dataset.table) draw(node);
        node.querySelectorAll("[data-table]").forEach(draw);
      });
    });
  }

  new MutationObserver(look).observe(document.documentElement, {
    childList: true, subtree: true, attributes: true, attributeFilter: ["data-table"],
  });
})();
