"use strict";
// Draws the charts of the page that need the library. Options come from data
// blocks of the page; every function stands here, and no text of a block is
// ever run.
(() => {
  const nbsp = "\u00a0";
  const round = (v, n) => String(Number(v.toPrecision(n))).replace("-", "\u2212");
  // Groups of three from ten thousand on, as in the tables.
  const count = (v) => {
    const text = round(v, 3);
    return /^\d{5,}$/.test(text) ? text.replace(/\B(?=(\d{3})+$)/g, nbsp) : text;
  };
  // How a value reads, by the name that a data block gives.
  const formats = {
    km: { axis: (v) => round(v, 4), tip: (v) => round(v, 4) + nbsp + "km", gap: "\u2013" },
    number: { axis: (v) => count(v), tip: (v) => count(v), gap: "\u2013" },
    rate: { axis: count, tip: (v) => count(v) + nbsp + "bit/s", gap: "no key" },
    percent: { axis: (v) => round(v, 3) + nbsp + "%", tip: (v) => round(v, 3) + nbsp + "%", gap: "\u2013" },
  };
  const dashes = { solid: "solid", dashed: [7, 4], dotted: [2, 3], dashdot: [9, 3, 2, 3], longdash: [14, 4] };

  // A band is drawn at its first point as one outline for each stretch without
  // a gap; a low edge that is not a number is the foot of the axis.
  const renderers = {
    band: (data, fill) => (params, api) => {
      if (params.dataIndexInside !== 0) return null;
      const foot = params.coordSys.y + params.coordSys.height;
      const shapes = [];
      let up = [], down = [];
      const close = () => {
        if (up.length > 1) {
          shapes.push({ type: "polygon", silent: true, shape: { points: up.concat(down.reverse()) }, style: { fill, opacity: 0.2 } });
        }
        up = [];
        down = [];
      };
      for (const [x, low, high] of data) {
        if (high === null) {
          close();
          continue;
        }
        const top = api.coord([x, high]);
        up.push(top);
        down.push([top[0], low === null ? foot : api.coord([x, low])[1]]);
      }
      close();
      return { type: "group", children: shapes };
    },
  };

  // resolve replaces names of colours and dashes; nothing else of the options.
  const resolve = (node, css) => {
    for (const [key, value] of Object.entries(node)) {
      if (value && typeof value === "object") resolve(value, css);
      else if (/color$/i.test(key) && typeof value === "string" && value.startsWith("--")) node[key] = css.getPropertyValue(value).trim();
    }
    // A halo keeps labels readable over lines.
    if (node.label) Object.assign(node.label, { textBorderColor: css.getPropertyValue("--paper").trim(), textBorderWidth: 3 });
    if (node.lineStyle && Object.hasOwn(dashes, node.lineStyle.type)) node.lineStyle.type = dashes[node.lineStyle.type];
  };

  const tip = (x, y) => (params) => {
    const box = document.createElement("div");
    const head = document.createElement("b");
    head.textContent = x.tip(params[0].axisValue);
    box.append(head);
    for (const p of params) {
      if (p.seriesType !== "line" || !p.seriesName) continue;
      const line = document.createElement("div");
      const name = document.createElement("span");
      const value = document.createElement("span");
      const v = p.value[1];
      name.textContent = p.seriesName;
      value.textContent = typeof v === "number" && Number.isFinite(v) ? y.tip(v) : y.gap;
      line.append(name, value);
      box.append(line);
    }
    return box;
  };

  // A second axis above: the loss that goes with the distance.
  const addLoss = (option, loss, css) => {
    const below = option.xAxis[0];
    if (loss.at.length === 0) return;
    const color = css.getPropertyValue("--ink-soft");
    option.xAxis.push({
      type: "value", position: "top", min: below.min, max: below.max,
      axisLine: { show: true, lineStyle: { color } }, splitLine: { show: false }, axisPointer: { show: false },
      axisTick: { show: true, customValues: loss.at, lineStyle: { color } },
      axisLabel: { color, hideOverlap: true, customValues: loss.at, formatter: (v) => loss.labels[loss.at.indexOf(v)] ?? "" },
    });
  };

  // What stands at the end of a line: its number, and its name where there is room.
  const endText = (end, narrow) => {
    const text = narrow || !end.text ? end.number : end.text;
    return text.length > 24 ? text.slice(0, 23) + "\u2026" : text;
  };

  // The end of each line that is shown, in pixels.
  const endsOf = (chart, option, ends, narrow, hidden) => {
    const found = [];
    const foot = chart.convertToPixel({ yAxisIndex: 0 }, option.yAxis[0].min);
    option.series.forEach((s, i) => {
      if (s.type !== "line" || !ends[i]?.number || hidden.has(s.name)) return;
      const last = s.data.findLast((d) => d.value[1] !== null);
      if (!last) return;
      const [x, y] = chart.convertToPixel({ xAxisIndex: 0, yAxisIndex: 0 }, last.value);
      found.push({ x, y: Math.min(y, foot), foot, text: endText(ends[i], narrow), color: s.lineStyle.color });
    });
    return found;
  };

  // Labels at the ends of the lines, shifted apart: in a column beside the
  // chart, or, where a line ends within it, below or above its end.
  const placeEnds = (chart, { option, ends, narrow }, hidden) => {
    const css = getComputedStyle(document.documentElement);
    const paper = css.getPropertyValue("--paper").trim();
    const gap = 13;
    const edge = chart.convertToPixel({ xAxisIndex: 0 }, option.xAxis[0].max);
    const all = endsOf(chart, option, ends, narrow, hidden);
    const column = all.filter((e) => e.x > edge - 3).sort((a, b) => a.y - b.y);
    column.forEach((e, i) => { e.at = i === 0 ? e.y : Math.max(e.y, column[i - 1].at + gap); });
    column.reverse().forEach((e, i) => { e.at = Math.min(e.at, i === 0 ? e.foot + 5 : column[i - 1].at - gap); });
    const within = all.filter((e) => e.x <= edge - 3).sort((a, b) => a.x - b.x);
    const placed = within.map((e) => ({ left: e.x - 6, width: 12, at: e.y })); // their marks stay free
    for (const e of within) {
      const width = 7 * e.text.length;
      e.left = Math.min(e.x + 6, chart.getWidth() - width);
      const free = (at) => at < e.foot && !placed.some((p) => Math.abs(p.at - at) < gap && p.left < e.left + width && e.left < p.left + p.width);
      e.at = [1, 2, -1, 3, -2, 4, -3, -4, -5].map((n) => e.y + n * gap).find(free) ?? e.y - gap;
      placed.push({ ...e, width });
    }
    const elements = [];
    for (const e of all) {
      const column = e.left === undefined;
      const points = column ? [[e.x + 2, e.y], [e.x + 6, e.y], [e.x + 14, e.at], [e.x + 18, e.at]] : [[e.x, e.y + Math.sign(e.at - e.y) * 5], [e.left - 1, e.at]];
      elements.push({ type: "polyline", silent: true, z: 90, shape: { points }, style: { stroke: e.color, lineWidth: 1, fill: "none" } });
      elements.push({
        type: "text", silent: true, z: 100, x: column ? e.x + 20 : e.left, y: e.at,
        style: { text: e.text, fill: e.color, stroke: paper, lineWidth: 3, font: "12px " + css.getPropertyValue("--sans"), verticalAlign: "middle" },
      });
    }
    chart.setOption({ graphic: { elements } }, { replaceMerge: ["graphic"] });
  };

  // build makes the options of one chart for the style in force.
  const build = (text, width) => {
    const { x, y, ends, loss, option } = JSON.parse(text);
    const css = getComputedStyle(document.documentElement);
    const narrow = width < 560;
    resolve(option, css);
    addLoss(option, loss, css);
    option.grid[0].right = Math.ceil(Math.max(16, ...ends.map((e) => 28 + 6.9 * endText(e, narrow).length)));
    if (loss.at.length === 0) option.grid[0].top = 28;
    option.textStyle = { fontFamily: css.getPropertyValue("--sans"), fontSize: 12 };
    option.aria = { enabled: false };
    option.xAxis[0].axisLabel.formatter = formats[x].axis;
    for (const axis of option.xAxis) {
      axis.nameTextStyle = { color: css.getPropertyValue("--ink-soft") };
      if (narrow) axis.splitNumber = 4;
    }
    for (const axis of option.yAxis) {
      axis.axisLabel.formatter = formats[y].axis;
      axis.nameTextStyle = { color: css.getPropertyValue("--ink-soft"), align: "right", padding: [0, 8, 0, 0] };
    }
    for (const s of option.series) {
      if (s.type === "custom") {
        s.renderItem = renderers[s.renderItem](s.data, s.color);
        s.clip = true;
        s.silent = true;
        s.z = 1;
      }
      s.emphasis = { disabled: true };
    }
    Object.assign(option.tooltip, {
      className: "tip", formatter: tip(formats[x], formats[y]), confine: true, transitionDuration: 0,
      padding: 0, borderWidth: 0, extraCssText: "box-shadow:none",
    });
    option.tooltip.axisPointer.lineStyle = { color: css.getPropertyValue("--ink-soft") };
    return { option, ends, narrow };
  };

  const charts = [];
  for (const box of document.querySelectorAll(".chart[data-options]")) {
    const text = document.getElementById(box.dataset.options).textContent;
    box.replaceChildren();
    const chart = echarts.init(box, null, { renderer: "svg" });
    const hidden = new Set();
    let built;
    const draw = () => {
      built = build(text, chart.getWidth());
      chart.setOption(built.option, true);
      for (const name of hidden) chart.dispatchAction({ type: "legendUnSelect", name });
      placeEnds(chart, built, hidden);
    };
    draw();
    charts.push({ chart, draw });
    new ResizeObserver(() => {
      if (document.documentElement.classList.contains("printing")) return;
      chart.resize();
      if (built.narrow === chart.getWidth() < 560) placeEnds(chart, built, hidden);
      else draw();
    }).observe(box);
    // What is saved has the light colours and one size, on any screen.
    box.onPaper = (take) => onPaper(() => {
      chart.getZr().flush();
      return take(box.querySelector("svg"));
    });
    for (const button of box.parentElement.querySelectorAll("button[data-series]")) {
      button.addEventListener("click", () => {
        const name = button.dataset.series;
        const show = hidden.delete(name);
        if (!show) hidden.add(name);
        button.setAttribute("aria-pressed", String(show));
        chart.dispatchAction({ type: show ? "legendSelect" : "legendUnSelect", name });
        placeEnds(chart, built, hidden);
      });
    }
  }

  const redraw = () => { for (const c of charts) c.draw(); };
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", redraw);

  // Paper gets the light colours and a width that fits between A4's margins.
  const toPaper = () => {
    document.documentElement.classList.add("printing");
    for (const c of charts) c.chart.resize({ width: 670, height: 330 });
    redraw();
  };
  const toScreen = () => {
    document.documentElement.classList.remove("printing");
    for (const c of charts) c.chart.resize({ width: "auto", height: "auto" });
    redraw();
  };
  const onPaper = (make) => {
    toPaper();
    try {
      return make();
    } finally {
      toScreen();
    }
  };
  addEventListener("beforeprint", toPaper);
  addEventListener("afterprint", toScreen);
})();
