"use strict";
// Draws the charts of the page. Options come from data blocks of the page;
// every function stands here, and no text of a block is ever run.
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

  // build makes the options of one chart for the style in force.
  const build = (text) => {
    const { x, y, option } = JSON.parse(text);
    const css = getComputedStyle(document.documentElement);
    const narrow = window.innerWidth < 560;
    resolve(option, css);
    option.textStyle = { fontFamily: css.getPropertyValue("--sans"), fontSize: 12 };
    option.aria = { enabled: false };
    for (const axis of option.xAxis) {
      axis.axisLabel.formatter = formats[x].axis;
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
    return option;
  };

  const charts = [];
  for (const box of document.querySelectorAll(".chart[data-options]")) {
    const text = document.getElementById(box.dataset.options).textContent;
    box.replaceChildren();
    const chart = echarts.init(box, null, { renderer: "svg" });
    const hidden = new Set();
    const draw = () => {
      chart.setOption(build(text), true);
      for (const name of hidden) chart.dispatchAction({ type: "legendUnSelect", name });
    };
    draw();
    charts.push({ box, chart, draw });
    new ResizeObserver(() => {
      if (!document.documentElement.classList.contains("printing")) chart.resize();
    }).observe(box);
    for (const button of box.parentElement.querySelectorAll("button[data-series]")) {
      button.addEventListener("click", () => {
        const name = button.dataset.series;
        const show = hidden.delete(name);
        if (!show) hidden.add(name);
        button.setAttribute("aria-pressed", String(show));
        chart.dispatchAction({ type: show ? "legendSelect" : "legendUnSelect", name });
      });
    }
  }

  const redraw = () => { for (const c of charts) c.draw(); };
  matchMedia("(prefers-color-scheme: dark)").addEventListener("change", redraw);

  // Paper gets the light colours and a width that fits between A4's margins.
  addEventListener("beforeprint", () => {
    document.documentElement.classList.add("printing");
    for (const c of charts) c.chart.resize({ width: 670, height: 290 });
    redraw();
  });
  addEventListener("afterprint", () => {
    document.documentElement.classList.remove("printing");
    for (const c of charts) c.chart.resize({ width: "auto", height: "auto" });
    redraw();
  });
})();
