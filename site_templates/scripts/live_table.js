/* What should be read at the condition of the day, from the series that the page carries, and what follows from the
   readings. No tolerance is made here: bands come with the page, decisions from decision.js. Everything is in SI units.
   Classic script, no dependency. */
var commissionLiveTable = function (data) {
  "use strict";
  var expected = null, tables = data.expected ? data.expected.tables : [], steps = data.expected ? data.expected.steps : null;
  tables.forEach(function (table) {
    expected = table;
    table.series.forEach(function (series, n) { if (series) { spreadOut(series, n.toString(36)); } });
  });

  /* The table in force: the only one, or that of the capacity stage at which the machine runs; null where it has no such stage. */
  function tableAt(x) {
    var near = steps.at.map(function (step) { return Math.abs(step - x); }), least = Math.min.apply(null, near);
    return least <= steps.near ? tables[near.indexOf(least)] : null;
  }

  /* What a series leaves is carried for the points of its own regime; it is nothing at the others. */
  function spreadOut(series, sign) {
    Object.keys(series.left).forEach(function (key) {
      var own = series.left[key], next = 0;
      if (own.length) { series.left[key] = expected.regimes.split("").map(function (s) { return s === sign ? own[next++] : 0; }); }
    });
  }

  /* Saturation lines: even steps of the logarithm of pressure, straight between them. */
  function saturation(line, pressure) {
    var s = data.saturation;
    return s && pressure > 0 ? onLine(s[line], (Math.log(pressure) - s.first) / s.step) : null;
  }

  function onLine(rows, x) {
    if (!(x >= 0 && x <= rows.length - 1)) { return null; }
    var low = Math.min(Math.floor(x), rows.length - 2);
    return rows[low] + (rows[low + 1] - rows[low]) * (x - low);
  }

  /* Which regimes lie at the corners of the cell of a point, and in the cells around it; the nearest corner's first. */
  function regimesAt(point) {
    var cells = expected.axes.map(function (axis, n) {
      var p = axis.points, low = 0;
      if (!(point[n] >= p[0] - 1e-9 && point[n] <= p[p.length - 1] + 1e-9)) { return null; }
      while (low < p.length - 2 && point[n] > p[low + 1]) { low += 1; }
      return { low: low, share: (point[n] - p[low]) / (p[low + 1] - p[low]), last: p.length - 1 };
    });
    if (cells.indexOf(null) >= 0) { return null; }
    var corners = signs(0, 1), around = signs(-1, 2);
    if (corners.indexOf("-") >= 0) { return null; }
    var nearest = sign(cells.map(function (c) { return c.low + (c.share < 0.5 ? 0 : 1); }));
    return {
      shares: cells.reduce(function (found, c) {
        return [].concat.apply([], found.map(function (corner) {
          return [[corner[0] * (c.last + 1) + c.low, corner[1] * (1 - c.share)], [corner[0] * (c.last + 1) + c.low + 1, corner[1] * c.share]];
        }));
      }, [[0, 1]]),
      first: parseInt(nearest, 36),
      corners: numbers(corners),
      around: numbers(around)
    };

    function sign(place) {
      return expected.regimes.charAt(place.reduce(function (index, at, n) { return index * (cells[n].last + 1) + at; }, 0));
    }
    function signs(from, to) {
      var found = "", counts = cells.map(function () { return from; });
      while (counts) {
        found += sign(cells.map(function (c, n) { return Math.min(Math.max(c.low + counts[n], 0), c.last); }));
        counts = next(counts, from, to);
      }
      return found;
    }
    function next(counts, from, to) {
      for (var n = counts.length - 1; n >= 0; n -= 1) {
        if (counts[n] < to) { counts[n] += 1; return counts; }
        counts[n] = from;
      }
      return null;
    }
    function numbers(text) {
      return text.split("").filter(function (c, n) { return c !== "-" && text.indexOf(c) === n; }).map(function (c) { return parseInt(c, 36); })
        .filter(function (n) { return expected.series[n]; });
    }
  }

  /* The products of Chebyshev polynomials of a series at a point. */
  function basis(series, point) {
    var highest = series.terms.reduce(function (most, t) { return Math.max.apply(null, [most].concat(t)); }, 1);
    var polynomials = point.map(function (x, n) {
      var s = (x - series.centres[n]) / series.halves[n], row = [1, s];
      while (row.length <= highest) { row.push(2 * s * row[row.length - 1] - row[row.length - 2]); }
      return row;
    });
    return series.terms.map(function (term) {
      return term.reduce(function (product, power, n) { return product * polynomials[n][power]; }, 1);
    });
  }

  /* What a series leaves at the points of the grid, straight between them. */
  function left(series, key, shares) {
    var at = series.left[key];
    return at.length ? shares.reduce(function (sum, s) { return sum + at[s[0]] * s[1]; }, 0) * series.steps[key] : 0;
  }

  /* One, the axes from -1/2 to 1/2, their squares, their products: what the bands are written in. */
  function shape(point) {
    var x = expected.axes.map(function (axis, n) {
      var p = axis.points;
      return (point[n] - p[0]) / (p[p.length - 1] - p[0]) - 0.5;
    });
    var terms = [1].concat(x, x.map(function (a) { return a * a; }));
    x.forEach(function (a, n) { x.slice(n + 1).forEach(function (b) { terms.push(a * b); }); });
    return terms;
  }

  function dot(factors, terms) {
    return factors.reduce(function (sum, f, n) { return sum + f * terms[n]; }, 0);
  }

  /* Standard uncertainty of reading minus expectation in one regime, with how far off it may be; null where none. */
  function uncertainty(regime, key, terms, missing) {
    var band = expected.bands[regime][key], u, extra = 0;
    if (!band) { return null; }
    u = Math.exp(dot(band[0], terms));
    missing.forEach(function (condition) {
      extra += (expected.unknown[condition][regime] || {})[key] || 0;
    });
    return { u: Math.sqrt(Math.max(u * u + extra, 0.25 * u * u)), off: band[1] };
  }

  /* Everything that is expected at the conditions; `why` says why nothing is. `conditions` by key, null: not known. */
  function expect(conditions) {
    var point = [], missing = [], lacking = [], beyond = [], step = steps ? conditions[steps.key] : null;
    if (!tables.length) { return { why: "nothing", keys: [] }; }
    expected = tables[0];
    if (steps) {
      if (step === null || step === undefined) { lacking.push(steps.key); }
      else if (!tableAt(step)) { return { why: "no step", keys: [steps.key] }; }
      else { expected = tableAt(step); }
    }
    expected.axes.forEach(function (axis) {
      var x = conditions[axis.key];
      if (x === null || x === undefined) { lacking.push(axis.key); }
      else if (x < axis.points[0] - 1e-9 || x > axis.points[axis.points.length - 1] + 1e-9) { beyond.push(axis.key); }
      point.push(x);
    });
    expected.extras.forEach(function (extra) {
      var x = conditions[extra.key];
      if (x === null || x === undefined) { missing.push(extra.key); x = extra.rated; }
      if (x < extra.low - 1e-9 || x > extra.high + 1e-9) { beyond.push(extra.key); }
      point.push(x);
    });
    if (lacking.length) { return { why: "lacking", keys: lacking }; }
    if (beyond.length) { return { why: "beyond", keys: beyond }; }
    var regimes = regimesAt(point);
    if (!regimes || !expected.series[regimes.first]) { return { why: "no balance", keys: [] }; }
    var terms = shape(point), values = {};
    var by = regimes.corners.map(function (r) { return { r: r, series: expected.series[r], basis: basis(expected.series[r], point) }; });
    Object.keys(expected.series[regimes.first].rows).forEach(function (key) {
      var found = by.filter(function (one) { return one.series.rows[key]; }).map(function (one) {
        var sum = dot(one.series.rows[key], one.basis), value = one.series.logs.indexOf(key) >= 0 ? Math.exp(sum) : sum;
        return { r: one.r, value: value + left(one.series, key, regimes.shares), miss: one.series.errors[key] || 0 };
      });
      var own = found.filter(function (one) { return one.r === regimes.first; })[0];
      var bands = regimes.around.map(function (r) { return uncertainty(r, key, terms, missing); }).filter(Boolean);
      var band = uncertainty(regimes.first, key, terms, missing);
      values[key] = { value: own.value, all: found, u: band ? band.u : null, bands: bands };
    });
    return { values: values, regime: expected.names[regimes.first], change: regimes.corners.length > 1, missing: missing };
  }

  /* Inside, outside, or on the edge of the band: on the edge where the doubt of series or band could turn it. */
  function outcome(one, reading) {
    if (one.u === null || !one.bands.length) { return null; }
    var said = {};
    one.all.forEach(function (at) {
      one.bands.forEach(function (band) {
        var off = Math.min(2 * band.off + 0.01, 0.6), away = Math.abs(reading - at.value), doubt = at.miss * data.twoSided * band.u;
        if (commissionDecision.significant(Math.max(away - doubt, 0), band.u * (1 + off), 0.95)) { said.outside = true; }
        else if (!commissionDecision.significant(away + doubt, band.u * (1 - off), 0.95)) { said.inside = true; }
        else { said.edge = true; }
      });
    });
    if (said.edge || (said.inside && said.outside)) { return "edge"; }
    return said.outside ? "outside" : "inside";
  }

  /* Readings as engineers think them. `have` holds readings and conditions by key; `expectation` gives the line losses. */
  function derive(have, expectation) {
    var found = {}, e = expectation.values || {}, critical = data.saturation ? pressureAtEnd() : 0;
    function known() {
      return Array.prototype.every.call(arguments, function (key) { return get(key) !== null; });
    }
    function get(key) {
      if (have[key] !== null && have[key] !== undefined) { return have[key]; }
      return found[key] === undefined ? null : found[key];
    }
    function keep(key, value) {
      if ((have[key] === null || have[key] === undefined) && value !== null && isFinite(value)) { found[key] = value; }
    }
    function loss(key, pressure) {
      if (!e[key] || !e[pressure]) { return 0; }
      var there = saturation("dew", e[pressure].value);
      return there === null ? 0 : e[key].value - there;
    }
    function shifted(t, by) { return t === null ? null : t + by; }
    if (known("suction_pressure")) {
      var dew = saturation("dew", have.suction_pressure);
      if (known("suction_temperature") && dew !== null) { keep("compressor_superheat", have.suction_temperature - dew); }
      keep("evaporating_temperature", shifted(dew, loss("evaporating_temperature", "suction_pressure")));
    }
    if (known("discharge_pressure") && have.discharge_pressure < critical) {
      keep("condensing_temperature", shifted(saturation("dew", have.discharge_pressure), loss("condensing_temperature", "discharge_pressure")));
      if (known("liquid_temperature")) {
        var gap = 0, bubble = saturation("bubble", have.discharge_pressure);
        if (e.liquid_temperature && e.subcooling && e.discharge_pressure) {
          var there = saturation("bubble", e.discharge_pressure.value);
          gap = there === null ? 0 : e.liquid_temperature.value + e.subcooling.value - there;
        }
        if (bubble !== null) { keep("subcooling", bubble + gap - have.liquid_temperature); }
      }
    }
    difference("evaporator_temperature_difference", "heat_source_inlet_temperature", "evaporating_temperature");
    difference("condenser_temperature_difference", "condensing_temperature", "heat_sink_inlet_temperature");
    difference("evaporator_approach", "heat_source_outlet_temperature", "evaporating_temperature");
    difference("condenser_approach", "condensing_temperature", "heat_sink_outlet_temperature");
    difference("heat_source_temperature_change", "heat_source_inlet_temperature", "heat_source_outlet_temperature");
    difference("heat_sink_temperature_change", "heat_sink_outlet_temperature", "heat_sink_inlet_temperature");
    if (known("suction_pressure", "discharge_pressure")) { keep("pressure_ratio", have.discharge_pressure / have.suction_pressure); }
    heat("source", "cooling");
    heat("sink", "heating");
    return found;

    function difference(key, plus, minus) {
      if (known(plus, minus)) { keep(key, get(plus) - get(minus)); }
    }
    function heat(side, what) {
      var liquid = data.liquid[side], name = "heat_" + side, capacity = what + "_capacity";
      if (liquid && known(name + "_inlet_temperature", name + "_outlet_temperature", name + "_flow")) {
        var into = get(name + "_inlet_temperature"), out = get(name + "_outlet_temperature");
        var density = onLine(liquid.density, (into - liquid.first) / liquid.step);
        var specific = onLine(liquid.heat, ((into + out) / 2 - liquid.first) / liquid.step);
        if (density !== null && specific !== null) {
          keep(capacity, get(name + "_flow") * density * specific * (side === "source" ? into - out : out - into));
        }
      }
      if (known(capacity, "power_input") && have.power_input > 0) { keep(what + "_cop", get(capacity) / have.power_input); }
    }
  }

  function pressureAtEnd() {
    return Math.exp(data.saturation.first + data.saturation.step * (data.saturation.dew.length - 1));
  }

  return { expect: expect, outcome: outcome, derive: derive, saturation: saturation };
};
