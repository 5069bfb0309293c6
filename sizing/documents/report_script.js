(function () {
  "use strict";
  const SVG = "http://www.w3.org/2000/svg";
  document.querySelectorAll("section.option").forEach(setUp);

  function setUp(section) {
    const data = JSON.parse(section.querySelector("script.state").textContent);
    const choose = section.querySelector("select.choose");
    const find = section.querySelector("input.find");
    const told = section.querySelector(".told");
    const chosen = section.querySelector(".chosen");
    const card = section.querySelector(".card");
    const rows = Array.from(section.querySelectorAll("tr[data-member]"));
    const heads = rows.length
      ? Array.from(rows[0].closest("table").querySelectorAll("thead th"), headOf) : [];
    let pinned = -1;
    let shown = -1;

    section.querySelectorAll("svg").forEach(makeReachable);
    section.querySelector(".controls").hidden = false;
    choose.addEventListener("change", draw);
    find.addEventListener("input", () => look(false));
    find.addEventListener("keydown", (event) => { if (event.key === "Enter") { look(true); } });
    card.querySelector("button").addEventListener("click", close);
    section.addEventListener("keydown", (event) => { if (event.key === "Escape") { close(); } });
    rows.forEach((row) => row.addEventListener("click", () => pin(Number(row.dataset.member))));

    function headOf(head) {
      const unit = head.querySelector(".unit");
      const word = head.firstChild ? head.firstChild.textContent : "";
      return unit ? word + ", " + unit.textContent : word;
    }

    function draw() {
      const state = data.states[choose.selectedIndex];
      chosen.querySelectorAll("line[data-sense]").forEach((line) => {
        const force = state.forces[Number(line.dataset.member)];
        const look = data.inks[force.endsWith("T") ? "T" : force.endsWith("C") ? "C" : ""];
        line.setAttribute("stroke", look[0]);
        line.setAttribute("stroke-dasharray", look[1] || "none");
      });
      chosen.querySelectorAll("line[data-moved]").forEach((line) => {
        const ends = data.ends[Number(line.dataset.moved)];
        [["x1", 0, 0], ["y1", 0, 1], ["x2", 1, 0], ["y2", 1, 1]].forEach(([name, end, axis]) => {
          line.setAttribute(name, state.moved[ends[end]][axis]);
        });
      });
      chosen.querySelectorAll("text[data-force]").forEach((text) => {
        text.querySelector("tspan").textContent = state.forces[Number(text.dataset.force)];
      });
      section.querySelector(".caption").textContent = state.caption;
      if (shown >= 0) { fill(shown); }
    }

    function makeReachable(svg) {
      const lines = Array.from(svg.querySelectorAll("line[data-member]"));
      const reach = lines.map((line, k) => {
        const wide = document.createElementNS(SVG, "line");
        ["x1", "y1", "x2", "y2"].forEach((n) => wide.setAttribute(n, line.getAttribute(n)));
        const i = Number(line.dataset.member);
        wide.setAttribute("class", "reach");
        wide.setAttribute("tabindex", k === 0 ? "0" : "-1");
        wide.setAttribute("role", "button");
        wide.setAttribute("aria-label", "Member " + data.marks[i]);
        line.parentNode.appendChild(wide);
        wide.addEventListener("pointerenter", () => show(i));
        wide.addEventListener("pointerleave", () => { if (pinned >= 0) { show(pinned); } });
        wide.addEventListener("click", () => pin(i));
        wide.addEventListener("focus", () => show(i));
        wide.addEventListener("keydown", (event) => step(event, k, i));
        return wide;
      });
      function step(event, k, i) {
        const way = { ArrowRight: 1, ArrowDown: 1, ArrowLeft: -1, ArrowUp: -1 }[event.key];
        if (way) {
          const next = reach[(k + way + reach.length) % reach.length];
          reach[k].setAttribute("tabindex", "-1");
          next.setAttribute("tabindex", "0");
          next.focus();
          event.preventDefault();
        } else if (event.key === "Enter" || event.key === " ") {
          pin(i);
          event.preventDefault();
        }
      }
    }

    function look(whole) {
      const wanted = find.value.trim().toLowerCase();
      const marks = data.marks.map((mark) => mark.toLowerCase());
      const exact = marks.indexOf(wanted);
      const alike = marks.map((m, i) => i).filter((i) => marks[i].startsWith(wanted));
      const i = exact >= 0 ? exact : alike.length === 1 || whole ? alike[0] : undefined;
      if (!wanted) { told.textContent = ""; return; }
      if (i !== undefined) {
        told.textContent = "";
        pin(i);
      } else {
        told.textContent = alike.length ? alike.length + " marks begin so" : "no such mark";
      }
    }

    function pin(i) { pinned = i; show(i); }

    function show(i) {
      section.querySelectorAll(".picked").forEach((one) => one.classList.remove("picked"));
      section.querySelectorAll("[data-member='" + i + "']").forEach((one) => {
        one.classList.add("picked");
      });
      shown = i;
      fill(i);
      card.hidden = false;
    }

    function fill(i) {
      const list = card.querySelector("dl");
      list.replaceChildren();
      const name = choose.options[choose.selectedIndex].textContent;
      put("Force in " + name, data.states[choose.selectedIndex].forces[i]);
      Array.from(rows[i].cells).forEach((cell, j) => {
        if (cell.textContent) { put(heads[j], cell.textContent); }
      });
      function put(head, words) {
        const pair = document.createElement("div");
        const term = document.createElement("dt");
        const entry = document.createElement("dd");
        term.textContent = head;
        entry.textContent = words;
        pair.append(term, entry);
        list.append(pair);
      }
    }

    function close() {
      pinned = shown = -1;
      card.hidden = true;
      section.querySelectorAll(".picked").forEach((one) => one.classList.remove("picked"));
    }
  }
})();
