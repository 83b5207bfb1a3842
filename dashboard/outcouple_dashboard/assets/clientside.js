// What happens in the browser alone. Nothing here talks to a server.
"use strict";
(function () {
  const keep = () => window.dash_clientside.no_update;
  const state = { past: [], future: [], last: null };
  const PAGES = { "/": 0, "/vary": 1, "/compare": 2 };
  const DEEP = 100;

  function randomName() {
    const bytes = crypto.getRandomValues(new Uint8Array(16));
    return Array.from(bytes, (b) => b.toString(16).padStart(2, "0")).join("");
  }

  function typing() {
    const here = document.activeElement;
    return here && (here.tagName === "INPUT" || here.tagName === "TEXTAREA");
  }

  document.addEventListener("keydown", function (event) {
    if (!(event.ctrlKey || event.metaKey) || event.altKey) return;
    const key = event.key.toLowerCase();
    let button = null;
    if (key === "s") button = "save";
    else if (key === "z" && !typing()) button = event.shiftKey ? "redo" : "undo";
    const found = button && document.getElementById(button);
    if (found) {
      event.preventDefault();
      if (typing()) document.activeElement.blur();
      setTimeout(() => found.click(), 0);
    }
  });

  function formKey(doc, key) {
    const was = key || {};
    if (was.key && (doc.origin === "control" || doc.origin === "save") && was.opened === doc.opened) return keep();
    return { key: (was.key || 0) + 1, opened: doc.opened };
  }

  function remember(doc) {
    const travelled = doc.origin === "undo" || doc.origin === "redo";
    if (!state.doc || state.doc.opened !== doc.opened) {
      state.past = [];
      state.future = [];
    } else if (!travelled && state.last !== doc.text) {
      state.past.push(state.last);
      if (state.past.length > DEEP) state.past.shift();
      state.future = [];
    }
    state.last = doc.text;
    state.doc = doc;
  }

  function relayout() {
    requestAnimationFrame(() => window.dispatchEvent(new Event("resize")));
  }

  window.dash_clientside = Object.assign({}, window.dash_clientside, {
    outcouple: {
      newTab: () => randomName(),

      showPage: function (pathname) {
        const at = PAGES[pathname] === undefined ? 0 : PAGES[pathname];
        ["design", "vary", "compare"].forEach(function (name, n) {
          const link = document.getElementById("nav-" + name);
          if (!link) return;
          if (n === at) link.setAttribute("aria-current", "page");
          else link.removeAttribute("aria-current");
        });
        relayout();
        return [0, 1, 2].map((n) => n !== at);
      },

      firstTheme: function (clicks, _stamp) {
        const store = document.documentElement.getAttribute("data-mantine-color-scheme");
        const asked = window.dash_clientside.callback_context.triggered_id === "theme-switch" && clicks;
        if (asked) return store === "dark" ? "light" : "dark";
        let kept = null;
        try { kept = JSON.parse(localStorage.getItem("theme")); } catch (_) { kept = null; }
        if (kept === "dark" || kept === "light") return keep();
        return matchMedia("(prefers-color-scheme: dark)").matches ? "dark" : "light";
      },

      applyTheme: function (theme) {
        if (!theme) return [keep(), keep(), keep()];
        document.body.dataset.agThemeMode = theme;
        return [theme, theme === "dark" ? "Light" : "Dark", theme === "dark" ? "true" : "false"];
      },

      // One change of the document and all that follows from it in the browser: form, undo, header, pages.
      spread: function (doc, pathname, key) {
        if (!doc) return [keep(), true, true, true, false, "no design", "", true, keep(), keep()];
        const fresh = window.dash_clientside.callback_context.triggered.some((one) => one.prop_id === "doc.data");
        if (fresh) remember(doc);
        if (document.getElementById("work").hidden) relayout();
        const changed = doc.text !== doc.saved;
        const standing = !doc.file ? "not saved yet" : changed ? "changed" : "saved";
        return [
          fresh ? formKey(doc, key) : keep(),
          !state.past.length,
          !state.future.length,
          false,
          true,
          doc.file || "new design",
          standing,
          Boolean(doc.file) && !changed,
          pathname === "/vary" ? doc : keep(),
          pathname === "/compare" ? doc : keep(),
        ];
      },

      timeTravel: function (_undo, _redo) {
        const back = window.dash_clientside.callback_context.triggered_id === "undo";
        const from = back ? state.past : state.future;
        const to = back ? state.future : state.past;
        if (!from.length || !state.doc) return keep();
        to.push(state.last);
        const text = from.pop();
        return Object.assign({}, state.doc, { text: text, origin: back ? "undo" : "redo", serial: state.doc.serial + 1 });
      },

      address: function (link, pathname, vary) {
        if (link) {
          const search = "?d=" + link + (vary ? "&v=" + encodeURIComponent(vary) : "");
          if (window.location.search !== search) history.replaceState(history.state, "", (pathname || "/") + search);
        }
        return keep();
      },

      varySetup: function (...values) {
        return values[0] ? JSON.stringify(values.map((one) => one || "")) : keep();
      },

      copyLink: async function () {
        const done = (text) => {
          setTimeout(() => { const b = document.getElementById("copy-link"); if (b) b.textContent = "Copy link"; }, 1600);
          return text;
        };
        try {
          await navigator.clipboard.writeText(window.location.href);
          return done("Copied");
        } catch (_) {
          return done("It is in the address bar");
        }
      },

      redraw: function () { relayout(); return keep(); },
      closeMessage: (clicks) => (clicks ? true : keep()),

      // A clock runs while the newest job has not said that it is over; late words of older jobs change nothing.
      clock: function (job, seen) {
        const off = !job || Boolean(seen && seen[0] === job && seen[2]);
        return [off, off];
      },

      readUpload: function (contents, name) {
        if (!contents) return keep();
        const nonce = Date.now();
        const comma = contents.indexOf(",");
        if (!String(name || "").toLowerCase().endsWith(".toml"))
          return { error: "Only design files (.toml) can be taken.", nonce: nonce };
        if ((contents.length - comma) * 0.75 > 200000)
          return { error: "That file is too long for a design (200 kB at most).", nonce: nonce };
        try {
          const bytes = Uint8Array.from(atob(contents.slice(comma + 1)), (c) => c.charCodeAt(0));
          const text = new TextDecoder("utf-8", { fatal: true }).decode(bytes);
          return { text: text, name: name, nonce: nonce };
        } catch (_) {
          return { error: "That file is not UTF-8 text.", nonce: nonce };
        }
      },
    },
  });
})();
