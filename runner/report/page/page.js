// Draws the plots of the page: curves with zoom by mouse, keys and buttons, limits, marks and a table of the values.
// Text of the data is only ever set as text.
'use strict';
(() => {
  // Its legend would set a style attribute, which the page does not allow itself; the page has one of its own.
  Dygraph.PLUGINS = Dygraph.PLUGINS.filter((plugin) => plugin !== Dygraph.Plugins.Legend);

  const dark = matchMedia('(prefers-color-scheme: dark)');
  const roles = {
    stimulus: {width: 1, dash: null},
    reference: {width: 1.5, dash: [5, 3]},
    response: {width: 1.5, dash: null},
    error: {width: 1.2, dash: null},
  };
  // Those that are drawn later lie on top.
  const order = {stimulus: 0, response: 1, error: 1, reference: 2};
  const drawn = [];

  const make = (name, words, text) => {
    const node = document.createElement(name);
    if (words) node.className = words;
    if (text !== undefined) node.textContent = text;
    return node;
  };
  const colour = (name) => getComputedStyle(document.documentElement).getPropertyValue('--' + name).trim();
  const finite = (value) => value !== null && Number.isFinite(value);
  const short = (value, digits = 4) => {
    if (!finite(value)) return 'no number';
    return String(Number(value.toPrecision(Number.isInteger(value) ? Math.max(digits, 10) : digits)));
  };
  const timeText = (seconds) => {
    const size = Math.abs(seconds);
    if (size === 0) return '0';
    if (size < 1e-3) return short(seconds * 1e6, 6) + ' µs';
    if (size < 1) return short(seconds * 1e3, 6) + ' ms';
    return short(seconds, 7) + ' s';
  };

  class Panel {
    constructor(plot, data, below) {
      this.plot = plot;
      this.data = data;
      this.curves = data.curves.slice().sort((a, b) => order[a.role] - order[b.role]);
      this.hasBands = this.curves.some((curve) => curve.low);
      this.range = this.natural();
      this.node = make('div', below ? 'panel below' : 'panel');
      this.node.tabIndex = 0;
      this.node.setAttribute('role', 'img');
      this.node.setAttribute('aria-label', this.label());
      this.node.addEventListener('keydown', (event) => plot.key(event));
    }

    name() { return this.data.quantity + (this.data.unit ? ', ' + this.data.unit : ''); }

    label() {
      const parts = [this.name() + ' over ' + this.plot.data.over];
      for (const curve of this.curves) {
        const ys = curve.y.filter(finite);
        parts.push(ys.length === 0 ? curve.name + ': no finite value'
          : curve.name + ' from ' + short(ys.reduce((a, b) => Math.min(a, b))) + ' to ' + short(ys.reduce((a, b) => Math.max(a, b))));
      }
      if (this.data.limits.length > 0) parts.push(this.data.limits.length + ' limits');
      for (const mark of this.plot.data.marks) parts.push(mark.text + ' at ' + this.plot.xText(this.plot.toX(mark.x)));
      return parts.join('; ') + '. Keys: arrows move, plus and minus zoom, Escape shows all.';
    }

    // What is seen before anybody zooms: all of the curves, and the limits where they do not dwarf them.
    natural() {
      let low = Infinity, high = -Infinity;
      for (const curve of this.curves) for (const y of curve.y) if (finite(y)) { low = Math.min(low, y); high = Math.max(high, y); }
      if (!(low <= high)) { low = -1; high = 1; }
      const ends = [];
      for (const limit of this.data.limits) for (const end of [limit.min, limit.max]) if (finite(end)) ends.push(end);
      const span = Math.max(high - low, 1e-12 * Math.max(Math.abs(low), Math.abs(high)));
      if (this.data.unit === 'dB') {
        // A zero of the filter lies at minus infinity; what is far below every limit needs no room.
        const lowest = Math.min(high, ...ends);
        low = Math.max(low, lowest - 40);
      }
      for (const end of ends) {
        const size = Math.max(Math.abs(low), Math.abs(high), span);
        if (size > 0 && Math.abs(end) > 60 * size && this.data.unit !== 'dB') continue;
        low = Math.min(low, end);
        high = Math.max(high, end);
      }
      const room = (high - low) * 0.06 || Math.max(Math.abs(high) * 0.1, 1e-9);
      return [low - room, high + room];
    }

    rows() {
      const xs = this.plot.xs, rows = [], floor = this.range[0] - 10 * (this.range[1] - this.range[0]);
      const start = this.plot.isLog ? xs.findIndex((x) => x > 0) : 0;
      let before = null;
      for (let i = start; i < xs.length; ++i) {
        if (this.data.is_angle && i > start) {
          // An angle that goes on from the other side of the circle is no line through all of it.
          const turned = this.curves.some((curve) => finite(curve.y[i]) && finite(curve.y[i - 1]) && Math.abs(curve.y[i] - curve.y[i - 1]) > 180);
          if (turned) rows.push([(xs[i] + before) / 2, ...this.curves.map(() => (this.hasBands ? [null, null, null] : null))]);
        }
        before = xs[i];
        rows.push([xs[i], ...this.curves.map((curve) => {
          const y = finite(curve.y[i]) ? curve.y[i] : null;
          if (!this.hasBands) return y;
          if (y === null) return [null, null, null];
          if (!curve.low) return [y, y, y];
          return [finite(curve.low[i]) ? curve.low[i] : floor, y, finite(curve.high[i]) ? curve.high[i] : y];
        })]);
      }
      return rows;
    }

    colours() { return this.curves.map((curve) => colour(curve.role)); }

    draw() {
      const series = {};
      this.curves.forEach((curve, i) => {
        series['s' + i] = {strokeWidth: roles[curve.role].width, strokePattern: roles[curve.role].dash};
      });
      this.graph = new Dygraph(this.node, this.rows(), {
        labels: ['x', ...this.curves.map((_, i) => 's' + i)],
        series,
        customBars: this.hasBands,
        fillAlpha: 0.25,
        legend: 'never',
        colors: this.colours(),
        axisLineColor: colour('line'),
        gridLineColor: colour('grid'),
        connectSeparatedPoints: false,
        drawGapEdgePoints: true,
        dateWindow: this.plot.window(),
        valueRange: this.range,
        animatedZooms: false,
        highlightCircleSize: 3,
        axes: {
          x: {
            logscale: this.plot.isLog,
            pixelsPerLabel: 80,
            axisLabelFormatter: (x) => this.plot.tickText(x),
          },
          y: {axisLabelWidth: 62, axisLabelFormatter: (y) => short(y, 6)},
        },
        underlayCallback: (canvas, area) => this.under(canvas, area),
        highlightCallback: (_, x) => this.plot.read(x),
        unhighlightCallback: () => this.plot.read(null),
        zoomCallback: (from, to) => this.plot.follow(this, from, to),
        drawCallback: (graph, isFirst) => { if (!isFirst) this.plot.follow(this, ...graph.xAxisRange()); },
      });
    }

    under(canvas, area) {
      // The graph is not there yet when it draws for the first time.
      const graph = this.graph;
      if (!graph) { queueMicrotask(() => { if (this.graph) this.graph.updateOptions({}); }); return; }
      const px = (x) => area.x + graph.toPercentXCoord(x) * area.w;
      const [left, right] = graph.xAxisRange();
      canvas.save();
      canvas.beginPath();
      canvas.rect(area.x, area.y, area.w, area.h);
      canvas.clip();
      for (const limit of this.data.limits) {
        const from = limit.from === null ? left : Math.max(this.plot.toX(limit.from), left);
        const to = limit.to === null ? right : Math.min(this.plot.toX(limit.to), right);
        if (!(from <= to)) continue;
        const x = px(from), width = Math.max(px(to) - x, 2), fails = limit.verdict === 'fail';
        canvas.fillStyle = colour(fails ? 'beyond-fail' : 'beyond');
        const tops = finite(limit.max) ? graph.toDomYCoord(limit.max) : null;
        const bottoms = finite(limit.min) ? graph.toDomYCoord(limit.min) : null;
        if (tops !== null) canvas.fillRect(x, area.y, width, tops - area.y);
        if (bottoms !== null) canvas.fillRect(x, bottoms, width, area.y + area.h - bottoms);
        canvas.fillStyle = colour(fails ? 'fail' : 'faint');
        if (tops !== null) canvas.fillRect(x, tops - 1, width, 1.5);
        if (bottoms !== null) canvas.fillRect(x, bottoms, width, 1.5);
      }
      canvas.font = '12px system-ui, "DejaVu Sans", sans-serif';
      canvas.setLineDash([2, 3]);
      let taken = 0;
      for (const mark of this.plot.data.marks) {
        const x = px(this.plot.toX(mark.x));
        if (!(x >= area.x && x <= area.x + area.w)) continue;
        canvas.strokeStyle = canvas.fillStyle = colour(mark.verdict === 'fail' ? 'fail' : mark.verdict === 'undecided' ? 'doubt' : 'faint');
        canvas.beginPath();
        canvas.moveTo(x, area.y);
        canvas.lineTo(x, area.y + area.h);
        canvas.stroke();
        const isRight = x > area.x + area.w * 0.6;
        canvas.textAlign = isRight ? 'right' : 'left';
        if (this !== this.plot.panels[0]) continue;
        const at = [mark.text, x + (isRight ? -4 : 4), area.y + 13 + 14 * (taken++ % 6)];
        canvas.setLineDash([]);
        canvas.lineWidth = 4;
        canvas.strokeStyle = colour('ground');
        canvas.strokeText(...at);
        canvas.fillText(...at);
        canvas.lineWidth = 1;
        canvas.setLineDash([2, 3]);
      }
      canvas.restore();
    }

    recolour() {
      if (this.graph) this.graph.updateOptions({colors: this.colours(), axisLineColor: colour('line'), gridLineColor: colour('grid')});
    }
  }

  class Plot {
    constructor(figure) {
      this.figure = figure;
      this.data = JSON.parse(figure.querySelector('script').textContent);
      this.isTime = this.data.over === 'time';
      this.isLog = false;
      this.xs = this.data.x.map((x) => this.toX(x));
      this.full = this.fullWindow();
      this.seen = this.full;
      this.following = false;
      this.panels = this.data.panels.map((panel, i) => new Panel(this, panel, i > 0));
      this.build();
      this.draw();
    }

    toX(x) { return this.isTime && this.data.rate_hz > 0 ? x / this.data.rate_hz : x; }

    fullWindow() {
      const first = this.xs[0], last = this.xs[this.xs.length - 1], room = (last - first) * 0.01 || Math.abs(first) * 0.1 || 1;
      if (this.isLog) return [this.xs.find((x) => x > 0) * 0.95, last * 1.05];
      return [first - room, last + room];
    }

    window() { return this.seen; }

    xText(x) {
      if (!this.isTime) return short(x, 6) + ' Hz';
      return 'sample ' + Math.round(x * (this.data.rate_hz || 1)) + ' (' + timeText(x) + ')';
    }

    tickText(x) { return this.isTime ? timeText(x) : x >= 1e4 ? short(x / 1e3, 6) + ' kHz' : short(x, 6) + ' Hz'; }

    build() {
      const tools = make('div', 'tools'), host = this.figure.querySelector('.panels');
      const names = new Set();
      for (const panel of this.panels) {
        for (const curve of panel.curves) {
          const words = 'key ' + (curve.role === 'error' ? 'response' : curve.role);
          if (!names.has(curve.name)) tools.append(make('span', words, curve.name));
          names.add(curve.name);
        }
      }
      if (this.panels.some((panel) => panel.data.limits.length > 0)) tools.append(make('span', 'key limit', 'beyond a limit'));
      const button = (text, action) => {
        const node = make('button', '', text);
        node.type = 'button';
        node.addEventListener('click', action);
        tools.append(node);
        return node;
      };
      button('show all', () => this.reset());
      if (!this.isTime && this.xs[this.xs.length - 1] > 4 * this.xs.find((x) => x > 0)) {
        const axis = button('logarithmic axis', () => {
          this.isLog = !this.isLog;
          axis.textContent = this.isLog ? 'linear axis' : 'logarithmic axis';
          this.redrawAll();
        });
      }
      host.append(tools);
      for (const panel of this.panels) host.append(make('p', 'axis-name', panel.name()), panel.node);
      this.readout = make('p', 'readout');
      host.append(this.readout, this.table());
      this.read(null);
    }

    draw() {
      for (const panel of this.panels) panel.draw();
      this.tell();
    }

    redrawAll() {
      this.full = this.fullWindow();
      this.seen = this.full;
      for (const panel of this.panels) { panel.graph.destroy(); panel.graph = null; }
      this.draw();
    }

    // All panels show the same stretch.
    follow(source, from, to) {
      if (this.following || !source.graph || (from === this.seen[0] && to === this.seen[1])) return;
      this.show(from, to, source);
    }

    show(from, to, source = null) {
      this.following = true;
      this.seen = [from, to];
      for (const panel of this.panels) if (panel !== source && panel.graph) panel.graph.updateOptions({dateWindow: [from, to]});
      this.following = false;
      this.tell();
    }

    reset() {
      this.following = true;
      this.seen = this.full;
      for (const panel of this.panels) panel.graph.updateOptions({dateWindow: this.full, valueRange: panel.range});
      this.following = false;
      this.tell();
    }

    tell() { this.figure.dataset.from = this.seen[0]; this.figure.dataset.to = this.seen[1]; }

    key(event) {
      if (event.ctrlKey || event.altKey || event.metaKey) return;
      // A logarithmic axis moves by factors.
      const there = this.isLog ? Math.log : (x) => x, back = this.isLog ? Math.exp : (x) => x;
      const [from, to] = this.seen.map(there), [first, last] = this.full.map(there), span = to - from;
      const go = (a, b) => this.show(back(a), back(b));
      switch (event.key) {
        case 'ArrowLeft': { const by = Math.min(span * 0.2, from - first); go(from - by, to - by); break; }
        case 'ArrowRight': { const by = Math.min(span * 0.2, last - to); go(from + by, to + by); break; }
        case '+': case '=': go(from + span * 0.2, to - span * 0.2); break;
        case '-': go(Math.max(first, from - span / 3), Math.min(last, to + span / 3)); break;
        case 'Escape': case 'Home': this.reset(); break;
        default: return;
      }
      event.preventDefault();
    }

    nearest(x) {
      let low = 0, high = this.xs.length - 1;
      while (low < high) {
        const middle = (low + high) >> 1;
        if (this.xs[middle] < x) low = middle + 1; else high = middle;
      }
      return low > 0 && x - this.xs[low - 1] < this.xs[low] - x ? low - 1 : low;
    }

    read(x) {
      if (x === null) { this.readout.textContent = 'Drag to zoom, double click to show all.'; return; }
      const i = this.nearest(x), parts = [this.xText(this.xs[i])];
      for (const panel of this.panels) {
        for (const curve of panel.curves) {
          let text = curve.name + ' ' + short(curve.y[i], 6) + (panel.data.unit ? ' ' + panel.data.unit : '');
          if (curve.low && finite(curve.y[i])) text += ' (' + (finite(curve.low[i]) ? short(curve.low[i], 5) : 'no lower end') + ' to ' + short(curve.high[i], 5) + ')';
          parts.push(text);
        }
      }
      this.readout.textContent = parts.join('; ');
    }

    table() {
      const details = make('details', 'values');
      details.append(make('summary', '', 'the values as a table'));
      details.addEventListener('toggle', () => {
        if (details.childElementCount > 1) return;
        const table = make('table'), head = table.createTHead().insertRow(), body = table.createTBody();
        const columns = [];
        for (const panel of this.panels) {
          for (const curve of panel.curves) {
            const unit = panel.data.unit ? ', ' + panel.data.unit : '', quantity = panel.data.quantity + ' of the ';
            columns.push([(this.isTime ? '' : quantity) + curve.name + unit, curve.y]);
            if (curve.low) columns.push(['from', curve.low], ['to', curve.high]);
          }
        }
        const lead = this.isTime ? ['sample', 'time, s'] : ['frequency, Hz'];
        for (const name of [...lead, ...columns.map((column) => column[0])]) head.append(make('th', 'number', name));
        this.data.x.forEach((x, i) => {
          const row = body.insertRow(), cell = (text) => row.append(make('td', 'number', text));
          cell(String(x));
          if (this.isTime) cell(short(this.xs[i], 9));
          for (const [, values] of columns) cell(finite(values[i]) ? String(values[i]) : '');
        });
        const wide = make('div', 'wide');
        wide.tabIndex = 0;
        wide.append(table);
        details.append(wide);
      });
      return details;
    }

    recolour() { for (const panel of this.panels) panel.recolour(); }
    resize() { for (const panel of this.panels) if (panel.graph) panel.graph.resize(); }
  }

  const drawIn = (root) => {
    for (const figure of root.querySelectorAll('.plot')) {
      if (figure.dataset.drawn || figure.closest('details.case:not([open])')) continue;
      figure.dataset.drawn = 'yes';
      drawn.push(new Plot(figure));
    }
  };

  // A page of many cases opens at once: a plot is drawn when it comes near.
  const near = new IntersectionObserver((entries) => {
    for (const entry of entries) if (entry.isIntersecting) { near.unobserve(entry.target); drawIn(entry.target.parentElement); }
  }, {rootMargin: '600px'});
  const watch = () => { for (const figure of document.querySelectorAll('.plot')) if (!figure.dataset.drawn) near.observe(figure); };

  const openTarget = () => {
    const target = location.hash.length > 1 ? document.getElementById(decodeURIComponent(location.hash.slice(1))) : null;
    for (let node = target; node; node = node.parentElement) if (node.tagName === 'DETAILS') node.open = true;
    if (target) target.scrollIntoView();
  };
  addEventListener('hashchange', openTarget);
  document.addEventListener('click', (event) => {
    // The same link twice changes no hash.
    const link = event.target.closest && event.target.closest('a[href^="#"]');
    if (link && link.hash === location.hash) openTarget();
  });

  dark.addEventListener('change', () => drawn.forEach((plot) => plot.recolour()));
  let closed = [];
  addEventListener('beforeprint', () => {
    closed = [...document.querySelectorAll('details.case:not([open]), #plan:not([open])')];
    for (const details of closed) details.open = true;
    // Paper is light.
    document.documentElement.dataset.printing = 'yes';
    const before = drawn.length;
    drawIn(document);
    drawn.forEach((plot) => { plot.resize(); plot.recolour(); });
    // A canvas that was never on the screen prints empty unless it has been read.
    for (const plot of drawn.slice(before)) {
      for (const canvas of plot.figure.querySelectorAll('.panel canvas')) if (canvas.width > 0) canvas.getContext('2d').getImageData(0, 0, 1, 1);
    }
  });
  addEventListener('afterprint', () => {
    for (const details of closed) details.open = false;
    delete document.documentElement.dataset.printing;
    drawn.forEach((plot) => { plot.resize(); plot.recolour(); });
  });
  watch();
  openTarget();
})();
