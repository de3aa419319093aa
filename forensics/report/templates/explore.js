"use strict";
// The explorer's script: unpacks the arrays, puts the plots together, and moves cursor and window.
// Times are seconds since the run's start; plots count milliseconds of local time, so that axes read as clocks.
(async () => {
  const byId = (id) => document.getElementById(id);
  const told = JSON.parse(byId("content").textContent);
  const POINTS = 3000; // points of a line in view before a coarser level is taken
  const SHORTEST = 20 * told.interval; // shortest time shown

  const fail = (error) => {
    byId("trouble").textContent = "This page can't be drawn: " + error.message;
    byId("trouble").hidden = false;
    throw error;
  };

  // ---- the arrays -------------------------------------------------------------------------------------
  async function unpack() {
    if (typeof DecompressionStream === "undefined") {
      throw new Error("it needs a browser of 2023 or later.");
    }
    const element = byId("data");
    const raw = atob(element.textContent);
    element.remove(); // nothing needs the text any more
    const bytes = new Uint8Array(raw.length);
    for (let i = 0; i < raw.length; i++) bytes[i] = raw.charCodeAt(i);
    const stream = new Blob([bytes]).stream().pipeThrough(new DecompressionStream("deflate"));
    return new Response(stream).arrayBuffer();
  }

  const buffer = await unpack().catch(fail);
  const KINDS = { f8: Float64Array, f4: Float32Array, i2: Int16Array, u1: Uint8Array };

  // An array as it lies in the pack, with `at(i)` for the number it means.
  function array(name) {
    const how = told.index[name];
    const codes = new KINDS[how.kind](buffer, how.at, how.count);
    const { base, scale } = how;
    const at = how.kind === "i2" ? (i) => (codes[i] === -32768 ? NaN : base + scale * codes[i]) : (i) => codes[i];
    return { at, codes, length: how.count };
  }

  const times = told.levels.map((step) => array("time/" + step).codes);
  const finest = told.levels[0];
  const activity = array("activity").codes;

  // First place in an ascending array that is not before x.
  function place(ascending, x) {
    let low = 0, high = ascending.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (ascending[middle] < x) low = middle + 1; else high = middle;
    }
    return low;
  }

  function nearest(ascending, x) {
    const i = place(ascending, x);
    if (i === 0) return 0;
    if (i === ascending.length) return i - 1;
    return x - ascending[i - 1] <= ascending[i] - x ? i - 1 : i;
  }

  // ---- words ------------------------------------------------------------------------------------------
  const clockOf = (t) => new Date(Math.round(told.start + told.offset + t) * 1000).toISOString().slice(0, 19).replace("T", " ");
  const local = (t) => (told.start + told.offset + t) * 1000;
  const since = (ms) => ms / 1000 - told.offset - told.start;

  function number(value) {
    if (!Number.isFinite(value)) return "no value";
    if (value === 0) return "0";
    const size = Math.abs(value);
    const places = size >= 100 ? 0 : size >= 10 ? 1 : 2;
    const text = size.toFixed(places);
    const grouped = size >= 10000 ? text.replace(/\B(?=(\d{3})+$)/g, "\u202f") : text;
    return (value < 0 && Number(text) !== 0 ? "\u2212" : "") + grouped;
  }

  const withUnit = (text, unit) => (unit && text !== "no value" ? text + "\u00a0" + unit : text);

  function put(parent, tag, words, name) {
    const element = document.createElement(tag);
    if (words) element.textContent = words;
    if (name) element.className = name;
    parent.append(element);
    return element;
  }

  // ---- the plots --------------------------------------------------------------------------------------
  const { Plotting } = Bokeh;
  const window_ = new Bokeh.Range1d({
    start: local(0), end: local(told.end), bounds: [local(-0.02 * told.end), local(1.02 * told.end)],
    min_interval: SHORTEST * 1000,
  });
  const strip = byId("strip");
  const curves = []; // every line over time: its source, its arrays by level, where its value is shown
  const rows = []; // every track: its figure, range and curves
  const colour = told.colours;

  function figure(height, y_range, settings) {
    const made = Plotting.figure({
      x_range: window_, y_range, height, sizing_mode: "stretch_width", tools: "xpan", active_drag: "xpan",
      toolbar_location: null, x_axis_type: "datetime", min_border_left: 62, min_border_right: 6, min_border_top: 4,
      min_border_bottom: 4, outline_line_color: colour.faint, background_fill_color: "#ffffff",
      border_fill_color: "#ffffff", ...settings,
    });
    dress(made);
    const clock = { hours: "%H:%M", hourmin: "%H:%M", minutes: "%H:%M", minsec: "%H:%M:%S", seconds: "%H:%M:%S" };
    made.below[0].formatter = new Bokeh.DatetimeTickFormatter({ ...clock, days: "%d %b" });
    return made;
  }

  function dress(made) {
    for (const axis of [...made.below, ...made.left]) {
      if (!("major_label_text_font_size" in axis)) continue;
      axis.major_label_text_font_size = "11px";
      axis.major_label_text_color = colour.ink;
      axis.axis_line_color = colour.faint;
      axis.minor_tick_line_color = null;
    }
    for (const grid of made.center) if ("grid_line_color" in grid) grid.grid_line_color = colour.grid;
  }

  // A row of the strip: name at the left, plot in the middle, lines and their values at the right.
  function row(name, unit, words) {
    const line = put(strip, "div", "", "track");
    const left = put(line, "div", "", "name");
    put(left, "span", name);
    if (unit) put(left, "span", "[" + unit + "]", "unit");
    const plot = put(line, "div");
    plot.setAttribute("role", "img");
    plot.setAttribute("aria-label", words);
    return { line, left, plot, values: put(line, "ul", "", "values") };
  }

  function named(values, curve, unit) {
    const item = put(values, "li");
    const swatch = put(item, "i");
    swatch.style.borderTop = `${Math.max(curve.width, 1.6)}px ${curve.dash} ${curve.colour}`;
    item.append(curve.label + " ");
    return { value: put(item, "b"), unit };
  }

  function addCurve(made, curve, levels) {
    const source = new Bokeh.ColumnDataSource({ data: { x: [], y: [] } });
    made.line({
      x: { field: "x" }, y: { field: "y" }, source, line_color: curve.colour, line_width: curve.width, line_dash: curve.dash,
    });
    return { source, levels, scales: curve.scales };
  }

  const levelsOf = (key) => told.levels.map((step) => array(key + "/" + step));

  function addTrack(track) {
    const names = track.curves.map((curve) => curve.label).join(", ");
    const at = row(track.name, track.unit, `${track.name} over time: ${names}`);
    const range = new Bokeh.Range1d({ start: 0, end: 1 });
    const made = figure(track.height, range, {});
    made.below[0].visible = false;
    made.left[0].ticker.desired_num_ticks = track.height > 70 ? 4 : 3;
    made.left[0].formatter.use_scientific = false;
    const mine = [];
    if (track.band) {
      const source = new Bokeh.ColumnDataSource({ data: { x: [], low: [], high: [] } });
      made.varea({
        x: { field: "x" }, y1: { field: "low" }, y2: { field: "high" }, source, fill_color: track.band.colour, fill_alpha: 0.22,
      });
      const band = { source, low: levelsOf(track.band.low), high: levelsOf(track.band.high), about: levelsOf(track.band.about) };
      mine.push(band);
    }
    for (const curve of track.curves) {
      const drawn = addCurve(made, curve, levelsOf(curve.key));
      drawn.shown = named(at.values, curve, track.unit);
      mine.push(drawn);
    }
    if (track.band) {
      const item = put(at.values, "li");
      put(item, "i").style.borderTop = `8px solid ${track.band.colour}38`;
      item.append("90 % ");
      mine[0].shown = { value: put(item, "b"), unit: track.unit };
    }
    if (track.name === "load ratio") {
      for (const mark of told.ratio_marks) {
        made.add_layout(new Bokeh.Span({ location: mark.at, dimension: "width", line_color: colour.ink, line_dash: mark.dash, line_width: 1 }));
        made.add_layout(new Bokeh.Label({
          x: 4, x_units: "screen", y: mark.at, text: mark.label, text_font_size: "10px", text_color: colour.ink,
          background_fill_color: "#ffffff", background_fill_alpha: 0.75,
        }));
      }
    }
    rows.push({ track, made, range, mine, plot: at.plot });
    curves.push(...mine);
  }

  function addBand(band) {
    const at = row(band.name, "", `${band.name} over time, one lane each: ${band.lanes.join(", ")}`);
    const lanes = band.lanes.length;
    const height = Math.max(17 * lanes, 24) + 8;
    const made = figure(height, new Bokeh.Range1d({ start: lanes - 0.5, end: -0.5 }), {});
    made.below[0].visible = false;
    made.left[0].visible = false;
    made.center.forEach((grid) => { grid.visible = false; });
    const column = (pick) => band.bars.map(pick);
    const source = new Bokeh.ColumnDataSource({ data: {
      left: column((bar) => local(bar[0])), right: column((bar) => local(bar[1])),
      top: column((bar) => bar[2] - 0.36), bottom: column((bar) => bar[2] + 0.36), colour: column((bar) => band.colours[bar[2]]),
    } });
    made.quad({
      left: { field: "left" }, right: { field: "right" }, top: { field: "top" }, bottom: { field: "bottom" }, source,
      fill_color: { field: "colour" }, line_color: { field: "colour" }, line_width: 1,
    });
    at.left.replaceChildren();
    const names = put(at.line, "ul", "", "names");
    at.line.replaceChild(names, at.left);
    band.lanes.forEach((name, k) => {
      put(names, "li", name).style.top = `${4 + (height - 8) * (k + 0.5) / lanes}px`;
    });
    put(at.values, "li", band.name);
    rows.push({ made, mine: [], plot: at.plot });
  }

  function addMap(map) {
    const at = row("load ratio by depth", told.units.length, "Map of the load ratio over time and measured depth, with the path of the bit");
    put(at.left, "span", `largest in each ${map.bin}`, "unit");
    const made = figure(230, new Bokeh.Range1d({ start: map.bottom, end: 0 }), {});
    const image = new (Bokeh.require("core/util/ndarray").Uint8NDArray)(array("map").codes.slice(), [map.rows, map.columns]);
    const source = new Bokeh.ColumnDataSource({ data: { image: [image] } });
    const shades = new Bokeh.LinearColorMapper({ palette: map.palette, low: 0, high: map.palette.length });
    made.image({
      image: { field: "image" }, source, x: local(map.from), y: 0, dw: (map.to - map.from) * 1000, dh: map.bottom, color_mapper: shades,
    });
    for (const section of told.hole) {
      made.add_layout(new Bokeh.Span({ location: section.at, dimension: "width", line_color: colour.muted, line_dash: "dashed", line_width: 1 }));
      made.add_layout(new Bokeh.Label({
        x: 4, x_units: "screen", y: section.at, text: "below: " + section.name, text_font_size: "10px", text_color: colour.ink,
        background_fill_color: "#ffffff", background_fill_alpha: 0.75,
      }));
    }
    const bit = told.tracks.flatMap((track) => track.curves).find((curve) => curve.label === "bit");
    const mine = bit ? [addCurve(made, { ...bit, scales: false }, levelsOf(bit.key))] : [];
    const names = map.edges.map((edge, k) => (k === 4 ? `${edge} sinusoidal` : k === 5 ? `${edge} helical, about` : `${edge}`));
    [...names.keys()].reverse().forEach((k) => {
      const item = put(at.values, "li");
      put(item, "i").style.borderTop = `11px solid ${map.palette[k + 1]}`;
      item.firstChild.style.outline = `1px solid ${colour.faint}`;
      item.append(k === names.length - 1 ? `above ${names[k]}` : `from ${names[k]}`);
    });
    rows.push({ made, mine, plot: at.plot });
    curves.push(...mine);
  }

  // ---- the window: which level, which part of it, and the scales that go with it ----------------------------
  let shown = 0, resting = 0; // time last shown, and what waits for rest
  let held = null; // what the sources hold: level, and the time from and to

  function wanted() {
    const from = since(window_.start), to = since(window_.end);
    let level = times.findIndex((time) => place(time, to) - place(time, from) <= POINTS);
    if (level < 0) level = times.length - 1;
    return { from, to, level };
  }

  function refresh() {
    const { from, to, level } = wanted();
    const apart = to - from;
    if (!held || held.level !== level || from < held.from || to > held.to || apart < (held.to - held.from) / 5) {
      held = { level, from: from - 0.4 * apart, to: to + 0.4 * apart };
      fill(level, held.from, held.to);
      document.documentElement.dataset.level = told.levels[level];
    }
    // While the window slides the scales wait for it to come to rest: new ones cost as much as all else.
    clearTimeout(resting);
    const rescale = () => scale(level, from, to);
    if (Math.abs(apart - shown) > 1e-3 * apart) rescale(); else resting = setTimeout(rescale, 120);
    shown = apart;
    placeMarks();
  }

  // Places of one level between two times; -1 where the line breaks at a gap in the log.
  function places(level, from, to) {
    const time = times[level];
    const gap = Math.max(5, 3 * told.levels[level]) * told.interval;
    const found = [];
    const last = Math.min(place(time, to) + 1, time.length);
    for (let i = Math.max(place(time, from) - 1, 0); i < last; i++) {
      if (found.length && time[i] - time[i - 1] > gap) found.push(-1);
      found.push(i);
    }
    return found;
  }

  function fill(level, from, to) {
    const found = places(level, from, to);
    const time = times[level];
    const x = Float64Array.from(found, (i) => (i < 0 ? NaN : local(time[i])));
    const values = (series) => Float64Array.from(found, (i) => (i < 0 ? NaN : series[level].at(i)));
    for (const curve of curves) {
      curve.source.data = curve.levels
        ? { x, y: values(curve.levels) }
        : { x, ...closed(values(curve.low), values(curve.high), values(curve.about)) };
    }
  }

  // A filled band can't break: where it has no value it is drawn with no width, along its curve.
  function closed(low, high, about) {
    let last = 0;
    for (let i = 0; i < low.length; i++) {
      if (Number.isFinite(about[i])) last = about[i];
      if (!Number.isFinite(low[i]) || !Number.isFinite(high[i])) low[i] = high[i] = last;
    }
    return { low, high };
  }

  // Each track's scale holds what is in view; a few stray values do not set it.
  function scale(level, from, to) {
    const time = times[level];
    const first = place(time, from), last = place(time, to);
    for (const { track, range, mine } of rows) {
      if (!track) continue;
      const seen = [];
      for (const curve of mine) {
        if (!curve.levels || !curve.scales) continue;
        for (let i = first; i < last; i++) {
          const value = curve.levels[level].at(i);
          if (Number.isFinite(value)) seen.push(value);
        }
      }
      let [low, high] = extent(seen);
      if (track.name === "load ratio") [low, high] = [0, Math.max(high, 1.1)];
      const margin = 0.08 * (high - low) || Math.abs(high) * 0.05 || 1;
      if (track.name !== "load ratio") low -= margin;
      high += margin;
      range.setv(track.down ? { start: high, end: low } : { start: low, end: high });
    }
  }

  function extent(seen) {
    if (!seen.length) return [0, 1];
    const order = Float64Array.from(seen).sort();
    const cut = order.length > 500 ? Math.floor(0.002 * order.length) : 0;
    return [order[cut], order[order.length - 1 - cut]];
  }

  // ---- cursor and episode, drawn over all tracks at once ----------------------------------------------------
  let at = 0; // the cursor's time
  let chosen = -1; // the episode last gone to
  let frame = null; // view of one plot, for the place of its frame

  function pixel(t) {
    const box = frame.frame.bbox;
    const plot = rows[0].plot.getBoundingClientRect(), outer = strip.getBoundingClientRect();
    const share = (local(t) - window_.start) / (window_.end - window_.start);
    return { x: plot.left - outer.left - strip.clientLeft + box.left + share * box.width, low: plot.left - outer.left + box.left, high: plot.left - outer.left + box.right, share };
  }

  function placeMarks() {
    if (!frame) return;
    const mark = pixel(at);
    byId("cursor").hidden = mark.share < 0 || mark.share > 1;
    byId("cursor").style.left = `${mark.x - 1}px`;
    const span = byId("span"), episode = told.episodes[chosen];
    span.hidden = !episode;
    if (!episode) return;
    const left = Math.max(pixel(episode.start).x, mark.low), right = Math.min(pixel(episode.end).x, mark.high);
    span.hidden = right < mark.low || left > mark.high;
    span.style.left = `${left}px`;
    span.style.width = `${Math.max(right - left, 1)}px`;
  }

  function setCursor(t) {
    const time = times[0];
    const i = nearest(time, Math.min(Math.max(t, 0), told.end));
    at = time[i];
    const words = clockOf(at);
    const clock = byId("clock");
    clock.textContent = words;
    clock.setAttribute("aria-valuemax", String(Math.round(told.end)));
    clock.setAttribute("aria-valuenow", String(Math.round(at)));
    clock.setAttribute("aria-valuetext", words);
    byId("doing").textContent = doing(finest === 1 ? i : Math.min((i >> 1) * finest, activity.length - 1));
    for (const curve of curves) if (curve.shown) curve.shown.value.textContent = valueAt(curve, i);
    placeMarks();
    showProfile();
  }

  const doing = (i) => told.activities[activity[i]] || "";

  // The value at a row, or the smallest and largest of the rows that one point stands for.
  function valueAt(curve, i) {
    const unit = curve.shown.unit;
    if (!curve.levels) {
      const low = curve.low[0].at(i & ~(finest > 1)), high = curve.high[0].at(finest > 1 ? i | 1 : i);
      return Number.isFinite(low) ? withUnit(`${number(low)} to ${number(high)}`, unit) : "no value";
    }
    if (finest === 1) return withUnit(number(curve.levels[0].at(i)), unit);
    const low = number(curve.levels[0].at(i & ~1)), high = number(curve.levels[0].at(i | 1));
    return withUnit(low === high ? low : `${low} to ${high}`, unit);
  }

  function look(from, to) {
    const least = Math.max(to - from, SHORTEST);
    const apart = Math.min(least, 1.04 * told.end);
    const start = Math.min(Math.max((from + to - apart) / 2, -0.02 * told.end), 1.02 * told.end - apart);
    window_.setv({ start: local(start), end: local(start + apart) });
  }

  function zoom(by, about) {
    const from = since(window_.start), to = since(window_.end);
    const centre = about >= from && about <= to ? about : (from + to) / 2;
    look(centre - (centre - from) * by, centre + (to - centre) * by);
  }

  // Keep the cursor in view when it is moved by key.
  function follow() {
    const from = since(window_.start), to = since(window_.end);
    if (at < from || at > to) look(at - (to - from) / 2, at + (to - from) / 2);
  }

  function go(k) {
    const episode = told.episodes[k];
    if (!episode) return;
    chosen = k;
    byId("episodes").selectedIndex = k;
    const margin = Math.min(Math.max(episode.end - episode.start, 300), 3600);
    look(episode.start - margin, episode.end + margin);
    setCursor(episode.peak);
    document.dispatchEvent(new CustomEvent("episode", { detail: episode.id }));
  }

  // The episode after or before the one gone to, or the cursor where none was.
  function step(by) {
    if (chosen >= 0) return go(chosen + by);
    const peaks = told.episodes.map((episode) => episode.peak);
    if (by > 0) go(peaks.findIndex((peak) => peak >= at));
    else for (let k = peaks.length - 1; k >= 0; k--) if (peaks[k] <= at) return go(k);
  }

  // ---- the profile along the hole ---------------------------------------------------------------------------
  let along = null;

  function makeProfile() {
    const profiles = told.profiles;
    if (!profiles) {
      byId("profile").remove();
      byId("profile-told").textContent = "No profile was kept of this run.";
      return null;
    }
    const force = told.units.force, length = told.units.length;
    const x = new Bokeh.Range1d({ start: -1, end: 1 });
    const made = Plotting.figure({
      x_range: x, y_range: new Bokeh.Range1d({ start: profiles.deepest * 1.02, end: 0 }), height: 430, sizing_mode: "stretch_width",
      tools: "", toolbar_location: null, outline_line_color: colour.faint, border_fill_color: "#ffffff", min_border_right: 14,
      x_axis_label: `effective tension [${force}], compression is negative`, y_axis_label: `measured depth [${length}]`,
    });
    dress(made);
    for (const axis of [made.below[0], made.left[0]]) {
      axis.axis_label_text_font_size = "12px";
      axis.axis_label_text_font_style = "normal";
      axis.axis_label_text_color = colour.ink;
      axis.formatter.use_scientific = false;
    }
    const line = (settings) => {
      const source = new Bokeh.ColumnDataSource({ data: { x: [], y: [] } });
      made.line({ x: { field: "x" }, y: { field: "y" }, source, ...settings });
      return source;
    };
    const front = new Bokeh.Span({ location: 0, dimension: "width", line_color: "#8cc0e0", line_width: 5, level: "underlay" });
    made.add_layout(front);
    made.add_layout(new Bokeh.Span({ location: 0, dimension: "height", line_color: colour.muted, line_width: 1 }));
    const labels = [];
    for (const section of told.hole) {
      made.add_layout(new Bokeh.Span({ location: section.at, dimension: "width", line_color: colour.muted, line_dash: "dashed", line_width: 1 }));
      const label = new Bokeh.Label({
        x: 0, y: section.at, text: "below: " + section.name, text_font_size: "10px", text_color: colour.ink,
        text_align: "right", text_baseline: "bottom",
      });
      made.add_layout(label);
      labels.push(label);
    }
    const inState = [1, 2].map((state) => line({ line_color: state === 1 ? "#e9b949" : "#7a1f3d", line_width: 9, line_alpha: 0.75, line_cap: "butt" }));
    const lines = {
      sinusoidal: line({ line_color: "#c77f0a", line_width: 1.5, line_dash: "dashed" }),
      helical: line({ line_color: "#7a1f3d", line_width: 1.5, line_dash: "dotted" }),
      tension: line({ line_color: colour.ink, line_width: 2 }),
    };
    const of = Object.fromEntries(["md", "tension", "sinusoidal", "helical", "state"].map((name) => [name, array("profile/" + name)]));
    return { made, x, front, labels, inState, lines, of, shown: -1 };
  }

  function showProfile() {
    if (!along) return;
    const { profiles } = told;
    const k = nearest(profiles.time, at);
    if (k !== along.shown) drawProfile(k);
    const late = profiles.time[k] - at;
    const off = Math.abs(late) < 0.5 * told.interval ? "at the cursor" : `${span(Math.abs(late))} ${late < 0 ? "before" : "after"} the cursor`;
    byId("profile-told").textContent = `Profile of ${clockOf(profiles.time[k])}, ${off}. ${along.words}`;
  }

  function span(seconds) {
    if (seconds < 90) return `${number(seconds)} s`;
    return seconds < 5400 ? `${number(seconds / 60)} min` : `${number(seconds / 3600)} h`;
  }

  function drawProfile(k) {
    along.shown = k;
    const { places: count } = told.profiles;
    const first = k * count;
    const take = (name) => Float64Array.from({ length: count }, (_, i) => along.of[name].at(first + i));
    const md = take("md"), load = take("tension"), state = take("state");
    for (const [name, source] of Object.entries(along.lines)) source.data = { x: name === "tension" ? load : take(name), y: md };
    along.inState.forEach((source, s) => {
      source.data = { x: load.map((value, i) => (state[i] === s + 1 || (i > 0 && state[i - 1] === s + 1) ? value : NaN)), y: md };
    });
    const seen = load.filter(Number.isFinite);
    const low = Math.min(...seen, 0), high = Math.max(...seen, 0), near = take("sinusoidal").filter(Number.isFinite).sort();
    const edge = Math.max(Math.min(low, near.length ? near[Math.floor(near.length / 4)] : low), low - 0.8 * (high - low || 1));
    const margin = 0.07 * (high - edge || 1);
    along.x.setv({ start: edge - margin, end: high + margin });
    for (const label of along.labels) label.x = high + 0.9 * margin;
    const reach = told.profiles.reach[k], bit = told.profiles.bit[k], unit = told.units.length;
    along.front.visible = reach !== null;
    if (reach !== null) along.front.location = reach;
    const moved = bit !== null && reach !== null && reach < bit - 1 ? `surface motion is felt down to ${withUnit(number(reach), unit)}` : "surface motion reaches the bit";
    along.words = `Bit at ${withUnit(number(bit ?? NaN), unit)}; ${moved}; ${buckled(md, state)}; largest compression ${withUnit(number(Math.max(0, -low)), told.units.force)}.`;
  }

  // Name the worst state and the depths it spans.
  function buckled(md, state) {
    const worst = state.reduce((a, b) => Math.max(a, b), 0);
    if (!worst) return "buckled nowhere";
    const depths = md.filter((_, i) => state[i] === worst);
    const name = worst === 2 ? "helical" : "sinusoidal";
    const top = number(Math.min(...depths)), bottom = withUnit(number(Math.max(...depths)), told.units.length);
    return bottom.startsWith(top) ? `${name} at ${bottom}` : `${name} between ${top} and ${bottom}`;
  }

  // ---- keys and mouse -----------------------------------------------------------------------------------------
  const acts = {
    next: () => step(1), previous: () => step(-1), in: () => zoom(0.5, at), out: () => zoom(2, at),
    whole: () => look(0, told.end),
  };

  function move(by) {
    const time = times[0];
    const apart = (since(window_.end) - since(window_.start)) / 200;
    const i = nearest(time, at);
    const next = nearest(time, at + by * apart);
    setCursor(time[next === i ? Math.min(Math.max(i + Math.sign(by), 0), time.length - 1) : next]);
    follow();
  }

  const keys = {
    n: acts.next, p: acts.previous, "+": acts.in, "=": acts.in, "-": acts.out, 0: acts.whole,
    Home: () => { setCursor(0); follow(); }, End: () => { setCursor(told.end); follow(); },
    ArrowLeft: (event) => move(event.shiftKey ? -10 : -1), ArrowRight: (event) => move(event.shiftKey ? 10 : 1),
  };

  function onKey(event) {
    if (event.ctrlKey || event.altKey || event.metaKey || event.target.closest("input, textarea, [contenteditable]")) return;
    // A list keeps the keys it uses itself.
    if (event.target.closest("select") && /^(Arrow|Home|End)/.test(event.key)) return;
    const act = keys[event.key];
    if (!act) return;
    event.preventDefault();
    act(event);
  }

  function timeUnder(event) {
    const box = frame.frame.bbox;
    const share = (event.clientX - rows[0].plot.getBoundingClientRect().left - box.left) / box.width;
    return share < 0 || share > 1 ? null : since(window_.start + share * (window_.end - window_.start));
  }

  function listen() {
    document.addEventListener("keydown", onKey);
    document.querySelectorAll("[data-do]").forEach((button) => button.addEventListener("click", acts[button.dataset.do]));
    const list = byId("episodes");
    if (list) list.addEventListener("change", () => go(list.selectedIndex));
    let down = null;
    strip.addEventListener("pointerdown", (event) => { down = event; }, true);
    strip.addEventListener("pointerup", (event) => {
      const still = down && Math.hypot(event.clientX - down.clientX, event.clientY - down.clientY) < 4;
      const t = timeUnder(event);
      if (still && t !== null) setCursor(t);
    }, true);
    strip.addEventListener("wheel", (event) => {
      if (!event.ctrlKey) return;
      event.preventDefault();
      zoom(event.deltaY > 0 ? 1.25 : 0.8, timeUnder(event) ?? at);
    }, { passive: false });
    // Many changes of the window may come between two pictures; one refresh does for them.
    let due = false;
    window_.change.connect(() => {
      if (due) return;
      due = true;
      requestAnimationFrame(() => { due = false; refresh(); });
    });
    new ResizeObserver(() => requestAnimationFrame(placeMarks)).observe(strip);
  }

  // One document holds all plots, since they share their window; the view of the first is given back.
  async function drawAll() {
    const whole = new Bokeh.Document();
    const shown = rows.map(({ made, plot }) => [made, plot]);
    if (along) shown.push([along.made, byId("profile")]);
    for (const [made] of shown) whole.add_root(made);
    const views = await Bokeh.embed.add_document_standalone(whole, document.body, shown.map(([, element]) => element));
    // The plots are no stops on the way through the page by Tab: every key works wherever the reader is.
    for (const [model] of shown) noStop(views.get(model).el);
    return views.get(shown[0][0]);
  }

  function noStop(element) {
    if (element.tabIndex >= 0) element.tabIndex = -1;
    const inside = [...element.children, ...(element.shadowRoot ? element.shadowRoot.children : [])];
    inside.forEach(noStop);
  }

  // ---- begin ----------------------------------------------------------------------------------------------------
  try {
    const [episodes, doingBand] = told.bands;
    addBand(episodes);
    told.tracks.slice(0, 2).forEach(addTrack);
    if (told.map) addMap(told.map);
    told.tracks.slice(2).forEach(addTrack);
    addBand(doingBand);
    const last = rows[rows.length - 1].made;
    last.below[0].visible = true;
    last.height += 28;
    refresh();
    along = makeProfile();
    frame = await drawAll();
    listen();
    chosen = told.gravest;
    if (byId("episodes")) byId("episodes").selectedIndex = chosen;
    setCursor(told.episodes[chosen]?.peak ?? 0);
    requestAnimationFrame(() => requestAnimationFrame(() => {
      placeMarks();
      document.documentElement.dataset.ready = String(Math.round(performance.now()));
    }));
  } catch (error) {
    fail(error);
  }
})();
