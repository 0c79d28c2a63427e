"use strict";
// Saves each figure as SVG and each table as CSV, from what the page holds.
// Nothing is sent anywhere: a file is handed to the browser as a download.
(() => {
  const root = document.documentElement;
  const svgSpace = "http://www.w3.org/2000/svg";

  const download = (name, type, text) => {
    const link = document.createElement("a");
    link.href = URL.createObjectURL(new Blob([text], { type }));
    link.download = name;
    link.click();
    setTimeout(() => URL.revokeObjectURL(link.href), 10000);
  };

  // A copy of a drawing that stands alone: what style sheets give to it is
  // written into its elements. Classes and identifiers stay behind.
  const styled = ["fill", "fill-opacity", "stroke", "stroke-width", "stroke-opacity", "stroke-dasharray", "stroke-linejoin", "paint-order", "font-family", "font-size", "font-weight", "opacity"];
  const copyOf = (drawing) => {
    const box = drawing.viewBox.baseVal;
    const width = box?.width || drawing.width.baseVal.value, height = box?.height || drawing.height.baseVal.value;
    const copy = document.createElementNS(svgSpace, "svg");
    const grow = (from, to) => {
      for (const child of from.childNodes) {
        if (child.nodeType === Node.TEXT_NODE) to.append(child.data);
        if (child.nodeType !== Node.ELEMENT_NODE || child.localName === "style") continue;
        const twin = document.createElementNS(svgSpace, child.localName);
        for (const { name, value } of child.attributes) {
          if (!["class", "style", "id"].includes(name) || name === "id" && from.localName === "defs") twin.setAttribute(name, value);
        }
        const style = getComputedStyle(child);
        if (!["title", "desc", "defs"].includes(child.localName)) {
          for (const name of styled) twin.setAttribute(name, style.getPropertyValue(name));
        }
        grow(child, twin);
        to.append(twin);
      }
    };
    const set = (element, values) => { for (const [name, value] of Object.entries(values)) element.setAttribute(name, value); };
    const edge = 12, frame = { width: width + 2 * edge, height: height + 2 * edge };
    set(copy, { ...frame, viewBox: [-edge, -edge, frame.width, frame.height].join(" ") });
    const ground = document.createElementNS(svgSpace, "rect");
    set(ground, { x: -edge, y: -edge, ...frame, fill: getComputedStyle(root).getPropertyValue("--paper").trim() });
    copy.append(ground);
    grow(drawing, copy);
    return copy;
  };

  // With the light colours, whatever the screen has.
  const inLight = (take, drawing) => {
    root.classList.add("printing");
    try {
      return take(drawing);
    } finally {
      root.classList.remove("printing");
    }
  };

  const saveFigure = (figure) => {
    const drawing = figure.querySelector(".drawings svg");
    const svg = drawing ? inLight(copyOf, drawing) : figure.querySelector(".chart").onPaper(copyOf);
    if (!svg.querySelector("title")) {
      const title = document.createElementNS(svgSpace, "title");
      title.textContent = figure.querySelector("figcaption").textContent;
      svg.prepend(title);
    }
    download("pairspan-" + figure.id + ".svg", "image/svg+xml", new XMLSerializer().serializeToString(svg));
  };

  // A number alone is written as spreadsheets read it; a text that one could
  // take for a formula gets an apostrophe in front, as in curve.csv.
  const powers = "⁰¹²³⁴⁵⁶⁷⁸⁹";
  const cell = (text) => {
    text = text.trim();
    const number = text.replace(/^\u2212/, "-").replace(/(\d)\u00a0(?=\d{3})/g, "$1")
      .replace(/×10(⁻?)([⁰¹²³⁴⁵⁶⁷⁸⁹]+)$/, (_, sign, power) => "e" + (sign && "-") + [...power].map((p) => powers.indexOf(p)).join(""));
    if (/^-?\d+(\.\d+)?(e-?\d+)?$/.test(number)) return number;
    if (/^[=+\-@\t\r]/.test(text)) text = "'" + text;
    return /[",\r\n]/.test(text) ? '"' + text.replace(/"/g, '""') + '"' : text;
  };
  const words = (element) => {
    const note = element.querySelector("small");
    return note ? element.textContent.slice(0, -note.textContent.length) + " (" + note.textContent + ")" : element.textContent;
  };
  const saveTable = (table) => {
    const lines = [...table.rows].map((row) => [...row.cells].map((c) => cell(words(c))).join(","));
    download("pairspan-" + table.id + ".csv", "text/csv;charset=utf-8", lines.join("\r\n") + "\r\n");
  };

  const button = (shown, whole, act) => {
    const b = document.createElement("button");
    b.type = "button";
    b.className = "save";
    b.textContent = shown;
    const rest = document.createElement("span");
    rest.className = "quiet";
    rest.textContent = whole;
    b.append(rest);
    b.addEventListener("click", act);
    return b;
  };
  for (const figure of document.querySelectorAll("figure")) {
    if (figure.querySelector(".drawings, .chart")) {
      figure.querySelector("figcaption").after(button("Save as SVG", ": " + figure.querySelector("figcaption b").textContent, () => saveFigure(figure)));
    }
  }
  for (const table of document.querySelectorAll("table[id]")) {
    (table.closest(".frame") ?? table).after(button("Save as CSV", ": " + table.caption.textContent, () => saveTable(table)));
  }
})();
