"use strict";

/* Moves the figures of the page. `page` comes from report/page/document.py: bokeh models, the numbers of each run as
   typed arrays, and the words to write. Nothing here computes hydraulics: every number shown is one of the arrays. */
function toeline(page) {
  const { runs, canal, moments, words, axes, profile, gate_figures: figures } = page;
  const gates = canal.name.length;
  const at = (id) => document.getElementById(id);
  const slider = at("moment"), play = at("play"), clock = at("clock"), gateChoice = at("gate"), along = at("along");
  const calm = window.matchMedia("(prefers-reduced-motion: reduce)");
  const state = { moment: 0, gate: 0, timer: null };
  const { start: canalStart, end: canalEnd } = profile.figure.x_range;
  const allLevels = [profile.figure.y_range.start, profile.figure.y_range.end];

  /* Figures out of sight wait until they are scrolled to: only what is seen is drawn at every moment. */
  const sight = new Map();
  const isInSight = (name) => sight.get(name) !== false;
  const observer = new IntersectionObserver((entries) => {
    for (const { target, isIntersecting } of entries) sight.set(target.dataset.figure, isIntersecting);
    if (entries.some((entry) => entry.isIntersecting)) showMoment(state.moment);
  }, { rootMargin: "200px" });

  const number = (value, decimals) => (Number.isFinite(value) ? value.toFixed(decimals).replace(/^-(0\.?0*)$/, "$1") : "-");
  const length = (value) => number(value, 2);
  const withUnit = (value) => (Number.isFinite(value) ? `${length(value)} ${words.length}` : "-");
  const discharge = (value) => number(value, words.discharge_decimals);
  const value = (run, name, row, gate) => run.series[name][row * gates + gate];
  const fillText = (selector, text) => document.querySelectorAll(selector).forEach((node) => { node.textContent = text; });

  /* What a gate shows at an output step, by name. */
  function readings(run, row, gate) {
    const read = (name) => value(run, name, row, gate);
    return {
      opening: read("opening"), discharge: read("discharge"), headwater: read("headwater"), tailwater: read("tailwater"),
      jet: read("jet_depth"), roller: read("roller_depth"), toe: read("toe"), end: read("end"),
      modularLimit: read("modular_limit"), drownedFrom: read("tailwater") - read("tailwater_margin"), leavesBelow: read("tailwater") - read("protection_margin"),
      protectionMargin: read("protection_margin"), jump: read("jump_state"), flow: read("gate_flow_state"),
    };
  }

  /* The surface of the water below a gate as points [distance, level], its jet and its roller as outlines; the surface
     goes on at the tailwater as far as `reach`, or ends where the jump does. */
  function waterBelow(now, gate, reach) {
    const floor = canal.floor_level[gate], lip = canal.sill_level[gate] + now.opening;
    const jetTop = floor + now.jet;
    const contracted = Math.min(2 * now.opening, Number.isFinite(now.toe) ? now.toe : Infinity);
    const rest = reach === null ? [] : [[reach, now.tailwater]];
    if (Number.isFinite(now.roller)) {
      const end = Number.isFinite(now.end) ? now.end : contracted;
      const surface = [[0, floor + now.roller], [end, now.tailwater], ...rest];
      const jet = [[0, lip], [contracted, jetTop], [end, floor], [0, floor]];
      return { surface, jet, roller: [[0, lip], [0, floor + now.roller], [end, now.tailwater], [end, floor], [contracted, jetTop]] };
    }
    if (Number.isFinite(now.toe)) {
      const end = Number.isFinite(now.end) ? now.end : now.toe;
      const surface = [[0, lip], [contracted, jetTop], [now.toe, jetTop], [end, now.tailwater], ...rest];
      const jet = [[0, lip], [contracted, jetTop], [now.toe, jetTop], [now.toe, floor], [0, floor]];
      return { surface, jet, roller: [[now.toe, jetTop], [end, now.tailwater], [end, jetTop]] };
    }
    if (Number.isFinite(now.jet) && now.opening > 0) {
      return { surface: [[0, lip], [contracted, jetTop], ...(reach === null ? [] : [[reach, jetTop]])], jet: [], roller: [] };
    }
    return { surface: [[0, now.tailwater], ...rest], jet: [], roller: [] };
  }

  const split = (points) => ({ xs: points.map((p) => p[0]), ys: points.map((p) => p[1]) });
  function outlines(list, colour = "", hatch = " ") {
    const kept = list.filter((points) => points.length > 2).map(split);
    return { xs: kept.map((p) => p.xs), ys: kept.map((p) => p.ys), colour: kept.map(() => colour), hatch: kept.map(() => hatch) };
  }

  /* Levels at the nodes as they are in the file, for the table and the hand that asks. */
  function showLevels(run, place) {
    const source = profile.water[place], columns = source.data, row = run.profiles[state.moment];
    const nodes = columns.bed.length;
    for (let node = 0; node < nodes; node++) {
      columns.water_level[node] = row < 0 ? NaN : run.water_level[row * nodes + node];
      columns.depth[node] = columns.water_level[node] - columns.bed[node];
    }
    source.change.emit();
  }

  /* The water pool by pool: below its gate the jet and the jump, then the levels of the nodes; none where it is dry. */
  function showWater(run, place) {
    const { chainage, bed, water_level: level, depth } = profile.water[place].data, row = run.rows[state.moment];
    const x = [], y = [], bodies = { xs: [], ys: [] }, rollers = { xs: [], ys: [], colour: [], hatch: [] };
    const headed = new Set();
    const add = (points, floor) => {
      x.push(...points.map((p) => (p[1] - p[2] > 0.001 ? p[0] : NaN)), NaN);
      y.push(...points.map((p) => p[1]), NaN);
      bodies.xs.push([...points.map((p) => p[0]), ...floor.map((p) => p[0])]);
      bodies.ys.push([...points.map((p) => Math.max(p[1], p[2])), ...floor.map((p) => p[1])]);
    };
    const below = (gate, reach) => {
      const now = readings(run, row, gate), at = canal.chainage[gate], floor = canal.floor_level[gate];
      const { surface, roller } = waterBelow(now, gate, reach);
      if (roller.length) {
        rollers.xs.push(roller.map((p) => at + p[0]));
        rollers.ys.push(roller.map((p) => p[1]));
        rollers.colour.push(words.colours[now.jump]);
        rollers.hatch.push(words.hatches[now.jump]);
      }
      headed.add(gate);
      return surface.map((p) => [at + p[0], p[1], floor]);
    };
    for (const [first, after, gate] of run.pools) {
      const points = gate < 0 ? [] : below(gate, null), from = points.length ? points[points.length - 1][0] : -Infinity;
      const floor = [];
      for (let node = after - 1; node >= first; node--) floor.push([chainage[node], bed[node]]);
      for (let node = first; node < after; node++) if (chainage[node] > from) points.push([chainage[node], level[node], bed[node]]);
      if (points.every((p) => Number.isFinite(p[1]))) add(points, floor);
    }
    canal.name.forEach((_, gate) => {
      if (headed.has(gate)) return;
      const points = below(gate, 1.5 * Math.max(canal.protection_end[gate] || 0, 20));
      add(points, [[points[points.length - 1][0], canal.floor_level[gate]], [points[0][0], canal.floor_level[gate]]]);
    });
    profile.surfaces[place].data = { x, y };
    profile.bodies[place].data = bodies;
    profile.rollers[place].data = rollers;
  }

  function showGates(run, place) {
    const row = run.rows[state.moment], columns = profile.gates[place].data;
    for (let gate = 0; gate < gates; gate++) {
      const now = readings(run, row, gate);
      columns.lip[gate] = canal.sill_level[gate] + now.opening;
      columns.top[gate] = columns.lip[gate] + canal.leaf_height[gate];
      columns.marker[gate] = words.markers[now.jump];
      columns.colour[gate] = words.colours[now.jump];
      columns.plan[gate] = words.plans[place];
    }
    profile.gates[place].change.emit();
  }

  function showCloseUp(run, place) {
    const gate = state.gate, now = readings(run, run.rows[state.moment], gate), shapes = figures[place].shapes;
    document.querySelectorAll(".telling")[place].textContent = telling(now, gate);
    if (!isInSight(`close_up_${place}`)) return;
    const floor = canal.floor_level[gate], sill = canal.sill_level[gate], above = canal.bed_above[gate];
    const left = axes.distances.start * 3 - 10, right = axes.distances.end * 3, bottom = axes.close_up_levels.start - 10;
    const lip = sill + now.opening, water = waterBelow(now, gate, right);
    const apron = canal.apron_end[gate] || 0, protection = Math.max(apron, canal.protection_end[gate] || 0);
    const thick = (axes.close_up_levels.end - axes.close_up_levels.start) * 0.05;
    const wide = (axes.distances.end - axes.distances.start) * 0.006;
    const box = (x0, x1, y0, y1) => [[x0, y0], [x1, y0], [x1, y1], [x0, y1]];
    shapes.ground.data = outlines([[[left, bottom], [left, above], [0, above], [0, sill], [2 * wide, sill], [2 * wide, floor], [right, floor], [right, bottom]]]);
    shapes.apron.data = outlines(apron > 0 ? [box(0, apron, floor - thick, floor)] : []);
    shapes.protection.data = outlines(protection > apron ? [box(apron, protection, floor - thick, floor)] : []);
    shapes.leaf.data = outlines([box(-wide, wide, lip, lip + canal.leaf_height[gate])]);
    shapes.water.data = outlines([
      now.headwater > above ? box(left, 0, above, now.headwater) : [],
      now.tailwater > floor || water.jet.length ? [[0, floor], ...water.surface, [right, floor]] : [],
    ]);
    shapes.jet.data = outlines([water.jet]);
    shapes.roller.data = outlines([water.roller], words.colours[now.jump], words.hatches[now.jump]);
    const line = split([[left, now.headwater], [0, now.headwater], [NaN, NaN], ...water.surface]);
    shapes.surface.data = { x: line.xs, y: line.ys };
    shapes.floor.data = { x: [left, 0, 0, 2 * wide, 2 * wide, right], y: [above, above, sill, sill, floor, floor] };
    const mark = (level) => ({ x: [axes.distances.end * 0.55, axes.distances.end], y: [level, level] });
    shapes.modular.data = mark(now.modularLimit);
    shapes.drowning.data = mark(now.drownedFrom);
    shapes.protection_limit.data = mark(now.leavesBelow);
  }

  /* The close-up in a sentence. */
  function telling(now, gate) {
    const flow = `Opening ${withUnit(now.opening)}, ${discharge(now.discharge)} ${words.discharge}, flow ${words.flow_states[now.flow]}.`;
    const floor = `; the floor is protected to ${withUnit(canal.protection_end[gate])}.`;
    const ends = Number.isFinite(now.end) ? ` It ends ${withUnit(now.end)} from the gate${floor}`
      : Number.isFinite(now.toe) ? ` Its toe stands ${withUnit(now.toe)} from the gate${floor} Its length is not defined.` : "";
    const margin = !Number.isFinite(now.protectionMargin) ? "" : now.protectionMargin < 0
      ? ` ${withUnit(-now.protectionMargin)} of tailwater is missing.`
      : ` The tailwater could fall ${withUnit(now.protectionMargin)} before it left the protected floor.`;
    const jump = words.jump_words[now.jump];
    return `${flow} ${jump[0].toUpperCase()}${jump.slice(1)}.${ends}${margin}`;
  }

  const NOW = ["gate", "jump", "flow", `opening, ${words.length}`, `discharge, ${words.discharge}`, `headwater, ${words.length}`, `tailwater, ${words.length}`, `jump from, ${words.length}`, `to, ${words.length}`, `protection margin, ${words.length}`];
  const nowCells = (now) => [words.jump_states[now.jump], words.flow_states[now.flow], length(now.opening), discharge(now.discharge), length(now.headwater), length(now.tailwater), length(now.toe), length(now.end), length(now.protectionMargin)];

  /* Writes a table: the heads once, then only the cells that change. */
  function write(table, heads, rows, wordColumns) {
    if (!table.tHead.rows.length) {
      const head = table.tHead.insertRow();
      for (const text of heads) { const cell = document.createElement("th"); cell.scope = "col"; cell.textContent = text; cell.className = head.cells.length < wordColumns ? "" : "number"; head.append(cell); }
    }
    const body = table.tBodies[0];
    while (body.rows.length > rows.length) body.deleteRow(-1);
    rows.forEach((cells, index) => {
      const row = body.rows[index] || body.insertRow();
      cells.forEach((text, column) => {
        if (!row.cells[column]) {
          const cell = document.createElement(column ? "td" : "th");
          if (!column) cell.scope = "row";
          if (column >= wordColumns) cell.className = "number";
          row.append(cell);
        }
        if (row.cells[column].textContent !== text) row.cells[column].textContent = text;
      });
    });
  }

  /* All gates, the runs of each below one another; what differs from the first run stands out. */
  function showNow() {
    const table = document.querySelector("table.now"), several = runs.length > 1;
    const cells = canal.name.flatMap((name, gate) => runs.map((run, place) => {
      const shown = nowCells(readings(run, run.rows[state.moment], gate));
      return several ? [name, words.names[place], ...shown] : [name, ...shown];
    }));
    write(table, several ? ["gate", "run", ...NOW.slice(1)] : NOW, cells, several ? 4 : 3);
    if (!several) return;
    cells.forEach((row, index) => row.forEach((text, column) => {
      const first = cells[index - (index % runs.length)];
      table.tBodies[0].rows[index].cells[column].classList.toggle("differs", column > 1 && text !== first[column]);
    }));
  }

  function showTables() {
    const lines = document.querySelectorAll("table.profile");
    showNow();
    runs.forEach((run, place) => {
      if (lines[place].closest("details").open) {
        const { chainage, bed, water_level: level, depth } = profile.water[place].data;
        write(lines[place], [`chainage, ${words.length}`, `bed, ${words.length}`, `water level, ${words.length}`, `depth, ${words.length}`],
          Array.from(chainage, (along, node) => [length(along), length(bed[node]), length(level[node]), length(depth[node])]), 0);
      }
    });
  }

  function labelAt(elapsed) {
    const index = moments.elapsed.findIndex((each) => each >= elapsed);
    return moments.labels[index < 0 ? moments.labels.length - 1 : index];
  }

  function showMoment(moment) {
    state.moment = Math.max(0, Math.min(moments.labels.length - 1, moment));
    const label = moments.labels[state.moment], elapsed = moments.elapsed[state.moment];
    slider.value = state.moment;
    slider.setAttribute("aria-valuetext", label);
    clock.textContent = label;
    fillText(".clock", label);
    runs.forEach((run, place) => {
      showLevels(run, place);
      showWater(run, place);
      showGates(run, place);
      showCloseUp(run, place);
      figures[place].figures.forEach((figure, index) => {
        if (isInSight(figure.name)) figures[place].cursors[index].location = words.start + elapsed;
      });
    });
    showTables();
    const drawn = runs[0].profiles[state.moment] < 0 ? NaN : runs[0].profile_elapsed[runs[0].profiles[state.moment]];
    const apart = Math.abs(drawn - elapsed) > 30000;
    fillText(".profile-clock", apart ? labelAt(drawn) : label);
    at("water-of").textContent = apart ? `Between two long profiles: gates and jumps are of ${label}, the water line is of ${labelAt(drawn)}.` : "";
  }

  function spread(range, values, least, room = 0.08) {
    let low = Infinity, high = -Infinity;
    for (const list of values) for (const each of list) if (Number.isFinite(each)) { if (each < low) low = each; if (each > high) high = each; }
    if (low > high) { low = 0; high = 1; }
    const middle = (low + high) / 2, half = Math.max(high - low, least) / 2 * (1 + 2 * room);
    range.start = middle - half;
    range.end = middle + half;
  }

  const column = (run, name, gate) => Float64Array.from(run.elapsed, (_, row) => value(run, name, row, gate));
  const minus = (one, other) => one.map((each, row) => each - other[row]);

  /* Everything about the chosen gate through the run, at every output step. */
  function showGate(gate) {
    state.gate = gate;
    gateChoice.value = gate;
    fillText(".gate-name", canal.name[gate]);
    const all = runs.map((run) => Object.fromEntries(Object.keys(run.series).map((name) => [name, column(run, name, gate)])));
    const protection = canal.protection_end[gate] || 0, longest = Math.max(...all.map((each) => each.end.reduce((most, end) => (end > most ? end : most), 0)));
    const reach = Math.max(1.35 * protection, Math.min(1.1 * longest, 4 * protection || Infinity), 1);
    axes.jump_distances.start = 0; axes.jump_distances.end = reach;
    axes.distances.start = -0.18 * reach; axes.distances.end = reach;
    const floor = canal.floor_level[gate];
    const levels = all.flatMap((each) => [each.headwater, each.tailwater]);
    spread(axes.close_up_levels, [...levels, [floor - 0.2, canal.sill_level[gate] + canal.max_opening[gate]]], 1);
    const drowns = all.map((each) => minus(each.tailwater, each.tailwater_margin));
    const modular = all.map((each) => each.modular_limit);
    const leaves = all.map((each) => minus(each.tailwater, each.protection_margin));
    spread(axes.tailwaters, [...all.map((each) => each.tailwater), ...drowns, ...leaves, ...modular], 0.1);
    spread(axes.headwaters, [...all.map((each) => each.headwater), [canal.target[gate]]], 0.1);
    spread(axes.openings, [...all.map((each) => each.opening), [0]], 0.1);
    runs.forEach((run, place) => showTraces(run, place, all[place], drowns[place], leaves[place], reach));
    if (along.value === "gate") lookAlong();
    nameGates();
    showMoment(state.moment);
  }

  function showTraces(run, place, of, drowns, leaves, reach) {
    const figure = figures[place], gate = state.gate;
    const time = Float64Array.from(run.elapsed, (elapsed) => words.start + elapsed);
    const clocks = Array.from(time, (each) => new Date(each).toISOString().slice(time.length && time[time.length - 1] - time[0] > 86400000 ? 5 : 11, 16).replace("T", " "));
    figure.series.data = {
      time, clock: clocks, toe: of.toe, end: of.end, tailwater: of.tailwater, modular: of.modular_limit, drowning: drowns, protection: leaves,
      headwater: of.headwater, opening: of.opening, discharge: of.discharge,
      jump: Array.from(of.jump_state, (each) => words.jump_words[each]), flow: Array.from(of.gate_flow_state, (each) => words.flow_states[each]),
    };
    const bands = { xs: [], ys: [], colour: [], hatch: [] }, settling = { left: [], right: [], top: [] };
    const edge = (row) => (row <= 0 ? time[0] : row >= time.length ? time[time.length - 1] + 60000 * (time.length === 1) : (time[row - 1] + time[row]) / 2);
    for (let row = 0, last; row < time.length; row = last) {
      const jump = of.jump_state[row], bounded = (each) => of.jump_state[each] === jump && Number.isFinite(of.end[each]);
      last = row + 1;
      if (!jump || !bounded(row)) continue;
      while (last < time.length && bounded(last)) last++;
      const rows = Array.from({ length: last - row }, (_, after) => row + after);
      const toe = (each) => (Number.isFinite(of.toe[each]) ? of.toe[each] : 0);
      const x = [edge(row), ...rows.map((each) => time[each]), edge(last)];
      const up = [row, ...rows, last - 1];
      bands.xs.push([...x, ...x.toReversed()]);
      bands.ys.push([...up.map((each) => of.end[each]), ...up.toReversed().map(toe)]);
      bands.colour.push(words.colours[jump]);
      bands.hatch.push(words.hatches[jump]);
    }
    time.forEach((_, row) => {
      if (!of.settling[row]) return;
      const last = settling.right.length - 1;
      if (last >= 0 && settling.right[last] >= edge(row)) settling.right[last] = edge(row + 1);
      else { settling.left.push(edge(row)); settling.right.push(edge(row + 1)); settling.top.push(0.05 * reach); }
    });
    const given = run.orders.gate.map((each, index) => (each === gate ? index : -1)).filter((index) => index >= 0);
    const pick = (name) => given.map((index) => run.orders[name][index]);
    figure.orders.data = {
      time: pick("elapsed").map((elapsed) => words.start + elapsed), opening: pick("opening"), marker: pick("marker"),
      colour: pick("colour"), filling: pick("filling"), words: pick("words"),
    };
    figure.bands.data = bands;
    figure.settling.data = settling;
    const apron = canal.apron_end[gate] || 0;
    figure.apron.top = apron;
    figure.protection.bottom = apron;
    figure.protection.top = Math.max(apron, canal.protection_end[gate] || 0);
    const target = canal.target[gate];
    figure.target.visible = Number.isFinite(target);
    figure.target.location = Number.isFinite(target) ? target : 0;
    writeThrough(run, place);
  }

  /* The gate through the run as a table: at every moment shown. */
  function writeThrough(run, place) {
    const table = document.querySelectorAll("table.through")[place];
    if (!table.closest("details").open) return;
    write(table, ["time", ...NOW.slice(1)], moments.labels.map((label, moment) => [label, ...nowCells(readings(run, run.rows[moment], state.gate))]), 3);
  }

  /* The whole canal, with room for the name of its last gate. */
  function wholeCanal() {
    const width = Math.max(profile.figure.inner_width || 1000, 200), last = canal.chainage[gates - 1];
    return [canalStart, Math.max(canalEnd, last + (last - canalStart) * 60 / (width - 60))];
  }

  /* As many times on an axis as find room; names and ranges follow the width as well. */
  function fitWidth() {
    for (const figure of page.time_figures) figure.below[0].ticker.desired_num_ticks = Math.max(2, Math.floor((figure.inner_width || 1000) / 120));
    if (along.value === "all") lookAlong();
    nameGates();
  }

  /* Names that find room beside one another; that of the chosen gate always. */
  function nameGates() {
    const columns = profile.gates[0].data, range = profile.figure.x_range;
    const perPixel = (range.end - range.start) / Math.max(profile.figure.inner_width || 300, 100), room = 17 * perPixel;
    let last = -Infinity;
    canal.chainage.forEach((chainage, gate) => {
      const chosen = gate === state.gate, free = chainage - last >= room && Math.abs(chainage - canal.chainage[state.gate]) >= room;
      columns.name[gate] = chosen || free ? canal.name[gate] : "";
      if (columns.name[gate]) last = chainage;
    });
    profile.gates[0].change.emit();
  }

  function lookAlong() {
    const { x_range: range, y_range: levels } = profile.figure;
    const near = along.value === "gate", chainage = canal.chainage[state.gate], { start: low, end: high } = axes.close_up_levels;
    const reach = 3 * Math.max(canal.protection_end[state.gate] || 0, 30);
    [range.start, range.end] = near ? [chainage - reach, chainage + 2 * reach] : wholeCanal();
    [levels.start, levels.end] = near ? [low, high + 0.3 * (high - low)] : allLevels;
  }

  function stop() {
    clearTimeout(state.timer);
    state.timer = null;
    play.textContent = "Play";
    play.setAttribute("aria-pressed", "false");
  }

  function step() {
    if (state.moment >= moments.labels.length - 1) { stop(); return; }
    showMoment(state.moment + 1);
    state.timer = setTimeout(step, calm.matches ? 1000 : 70);
  }

  function start() {
    if (state.moment >= moments.labels.length - 1) showMoment(0);
    play.textContent = "Pause";
    play.setAttribute("aria-pressed", "true");
    state.timer = setTimeout(step, 0);
  }

  function momentNearest(time) {
    const elapsed = time - words.start;
    let best = 0;
    moments.elapsed.forEach((each, index) => { if (Math.abs(each - elapsed) < Math.abs(moments.elapsed[best] - elapsed)) best = index; });
    return best;
  }

  slider.addEventListener("input", () => { stop(); showMoment(Number(slider.value)); });
  play.addEventListener("click", () => (state.timer === null ? start() : stop()));
  at("before").addEventListener("click", () => { stop(); showMoment(state.moment - 1); });
  at("after").addEventListener("click", () => { stop(); showMoment(state.moment + 1); });
  gateChoice.addEventListener("change", () => showGate(Number(gateChoice.value)));
  along.addEventListener("change", lookAlong);
  document.querySelectorAll("details.nodes, details.hours").forEach((each) => each.addEventListener("toggle", () => { if (each.open) { showTables(); runs.forEach(writeThrough); } }));
  document.querySelectorAll("a[data-moment]").forEach((link) => link.addEventListener("click", () => {
    stop();
    state.moment = Number(link.dataset.moment);
    showGate(Number(link.dataset.gate));
    slider.focus({ preventScroll: true });
  }));
  document.querySelectorAll('a[href^="#"]:not([data-moment])').forEach((link) => link.addEventListener("click", () => {
    document.querySelectorAll(`${link.getAttribute("href")} > details.folded`).forEach((fold) => { fold.open = true; });
  }));
  const unfold = at("unfold"), tables = document.querySelectorAll("#numbers details.folded");
  unfold.hidden = false;
  unfold.addEventListener("click", () => {
    const all = Array.from(tables).every((fold) => fold.open);
    tables.forEach((fold) => { fold.open = !all; });
    unfold.textContent = all ? "Unfold all tables" : "Fold all tables";
  });
  for (const figure of page.time_figures) figure.on_event("tap", (event) => { stop(); showMoment(momentNearest(event.x)); });
  profile.figure.on_event("tap", (event) => {
    let best = 0;
    canal.chainage.forEach((each, gate) => { if (Math.abs(each - event.x) < Math.abs(canal.chainage[best] - event.x)) best = gate; });
    showGate(best);
  });

  profile.figure.x_range.change.connect(nameGates);
  profile.figure.properties.inner_width.change.connect(fitWidth);

  /* A printer gets the short tables unfolded, and pictures of the figures as they stand: figures themselves do not
     follow the width of the sheet. */
  const unfolded = [];
  window.addEventListener("afterprint", () => unfolded.splice(0).forEach((fold) => { fold.open = false; }));
  window.addEventListener("beforeprint", () => {
    unfolded.push(...document.querySelectorAll("details.short:not([open])"));
    unfolded.forEach((fold) => { fold.open = true; });
    sight.clear();
    showMoment(state.moment);
    document.querySelectorAll(".plot").forEach((plot) => {
      const model = plot.querySelector("[data-root-id]").dataset.rootId;
      const picture = plot.nextElementSibling?.matches("img.printed") ? plot.nextElementSibling : document.createElement("img");
      picture.className = "printed";
      picture.alt = plot.getAttribute("aria-label");
      picture.src = Bokeh.index.get_by_id(model).export("png").canvas.toDataURL();
      plot.after(picture);
    });
  });

  showGate(firstToLookAt());
  fitWidth();
  document.querySelectorAll(".plot").forEach((plot) => observer.observe(plot));
  document.documentElement.dataset.ready = "yes";

  /* The page opens at the first thing that goes wrong. */
  function firstToLookAt() {
    const link = document.querySelector("#verdict a[data-moment]");
    if (link) state.moment = Number(link.dataset.moment);
    return link ? Number(link.dataset.gate) : 0;
  }
}
