// The live day sheet: reads the fields, shows what is expected and what it means, keeps what was typed, gives the record.
(function () {
  "use strict";
  var data = JSON.parse(document.getElementById("live-data").textContent);
  var form = document.getElementById("live");
  var table = commissionLiveTable(data);
  var air = data.air ? commissionLiveAir(data.air) : null;
  var store = "commission.live." + data.plant + "." + data.system;
  var fields = Array.prototype.slice.call(form.querySelectorAll("[data-field]"));
  var COPS = ["cooling_capacity", "heating_capacity", "cooling_cop", "heating_cop"];
  var NEEDS = {
    evaporating_temperature: ["suction_pressure"], compressor_superheat: ["suction_pressure", "suction_temperature"],
    evaporator_temperature_difference: ["suction_pressure"], condensing_temperature: ["discharge_pressure"],
    condenser_temperature_difference: ["discharge_pressure"], subcooling: ["discharge_pressure", "liquid_temperature"],
    evaporator_approach: ["suction_pressure", "heat_source_outlet_temperature"],
    condenser_approach: ["discharge_pressure", "heat_sink_outlet_temperature"],
    heat_source_temperature_change: ["heat_source_outlet_temperature", "heat_source_inlet_temperature"],
    heat_sink_temperature_change: ["heat_sink_outlet_temperature", "heat_sink_inlet_temperature"],
    pressure_ratio: ["suction_pressure", "discharge_pressure"],
    cooling_capacity: ["heat_source_inlet_temperature", "heat_source_outlet_temperature", "heat_source_flow"],
    heating_capacity: ["heat_sink_inlet_temperature", "heat_sink_outlet_temperature", "heat_sink_flow"],
    cooling_cop: ["power_input", "heat_source_outlet_temperature", "heat_source_flow"],
    heating_cop: ["power_input", "heat_sink_inlet_temperature", "heat_sink_flow"]
  };

  function by(id) { return document.getElementById(id); }
  function field(name) { return form.querySelector("[data-field='" + name + "']"); }
  function typed(name) { var one = field(name); return one ? one.value.trim() : ""; }
  function ticked(name) { var one = field(name); return Boolean(one && one.checked); }
  function mode() { return form.querySelector("[name=mode]:checked").value; }
  function label(key) { return data.quantities[key].label; }
  function small(key) {
    var words = label(key);
    return /^.[A-Z]/.test(words) ? words : words.charAt(0).toLowerCase() + words.slice(1);
  }
  function kind(key) { var one = data.quantities[key]; return data.kinds[one.shown || one.kind]; }

  // A number as typed: decimal comma or point, any minus sign. null: nothing there; NaN: no number.
  function number(words) {
    var plain = words.replace(/\s/g, "").replace(/[\u2212\u2013]/g, "-").replace(",", ".");
    if (plain === "") { return null; }
    return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(plain) ? Number(plain) : NaN;
  }
  function plain(words) { return String(words.replace(/\s/g, "").replace(/[\u2212\u2013]/g, "-").replace(",", ".").replace(/^\+/, "")); }

  function barometer() {
    var hectopascal = number(typed("v-barometric_pressure"));
    return hectopascal !== null && hectopascal >= 500 && hectopascal <= 1100 ? hectopascal * 100 : data.barometer;
  }
  function toSi(key, shown) {
    var k = kind(key);
    return shown * k.factor + k.offset + (k.gauge ? barometer() : 0);
  }
  function digits(k, shown) {
    if (!k.figures) { return k.digits; }
    var size = Math.abs(shown);
    return size >= 100 ? 0 : size >= 10 ? 1 : size >= 1 ? 2 : 3;
  }
  function signed(text) { return text.replace("-", "\u2212"); }
  function show(key, si) {
    var k = kind(key), shown = (si - (k.gauge ? barometer() : 0) - k.offset) / k.factor;
    return signed(commissionDecision.fixed(shown, digits(k, shown)));
  }
  function spread(key, si) {
    var k = kind(key), shown = si / k.factor;
    return signed(commissionDecision.fixed(shown, digits(k, 10 * shown)));
  }

  function conditions() {
    var found = {};
    data.conditions.forEach(function (key) {
      var shown = ticked("unknown-" + key) ? null : number(typed("v-" + key));
      found[key] = shown === null || isNaN(shown) ? null : toSi(key, shown);
    });
    return found;
  }
  // The humidity that follows from a wet bulb, where none was typed; null where there is nothing to follow from.
  function fromBulbs(have, read) {
    var of = data.air;
    if (!of || have[of.humidity] !== null || have[of.dry] === null || read[of.wet] === undefined) { return null; }
    return air.humidity(have[of.dry], read[of.wet], barometer());
  }
  function readings() {
    var found = {};
    data.readings.forEach(function (key) {
      var shown = number(typed("v-" + key));
      if (shown !== null && !isNaN(shown)) { found[key] = toSi(key, shown); }
    });
    return found;
  }
  function changedInstruments() {
    return data.conditions.concat(data.readings).filter(function (key) {
      var one = field("i-" + key);
      return one && one.value !== (data.instruments[key] || "");
    });
  }

  // Whether the plant stood still long enough; the sentence says which way.
  function steadiness() {
    var said = [], steady = true;
    [["since_start", "since-start", "the start"], ["since_defrost", "since-defrost", "the last defrost"]].forEach(function (one) {
      var limit = data.steady[one[0]], minutes = number(typed(one[1]));
      if (limit === undefined) { return; }
      var least = "at least " + Math.round(limit / 60) + " min are wanted";
      if (ticked("unknown-" + one[1]) || minutes === null || isNaN(minutes)) {
        steady = false;
        said.push("The time since " + one[2] + " is not known; " + least + ".");
      } else if (minutes * 60 < limit) {
        steady = false;
        said.push("Read too early: " + minutes + " min after " + one[2] + "; " + least + ".");
      }
    });
    return { steady: steady, text: said.join(" ") };
  }

  function element(tag, name, words) {
    var one = document.createElement(tag);
    if (name) { one.className = name; }
    one.textContent = words;
    return one;
  }
  function fill(place, parts) {
    place.textContent = "";
    parts.forEach(function (part) { place.appendChild(part); });
  }

  var WORDS = { inside: ["say-good", "inside"], edge: ["say-open", "on the edge of the band: decided when filed"], filed: ["soft", "judged when filed"] };

  // What stands beside one reading. `value` null: not read yet.
  function judged(key, value, expectation, state) {
    var one = expectation.values && expectation.values[key], parts = [], row = form.querySelector("[data-row='" + key + "']");
    row.removeAttribute("data-outcome");
    if (!one || one.u === null) {
      if (expectation.values && value !== null) { parts.push(element("span", "soft", "nothing is expected of it here")); }
      return { parts: parts, outcome: null };
    }
    if (state.test && value === null) {
      return { parts: [element("span", "soft", "shown once it is read")], outcome: null };
    }
    if (COPS.indexOf(key) >= 0 && !state.steady) {
      return { parts: [element("span", "soft", "not before the plant stands still")], outcome: null };
    }
    var half = data.twoSided * one.u;
    parts.push(element("span", "value number", show(key, one.value) + " " + kind(key).shown));
    parts.push(element("span", "band number", show(key, one.value - half) + " to " + show(key, one.value + half)));
    if (value === null) { return { parts: parts, outcome: null }; }
    var outcome = state.other(key) ? "filed" : table.outcome(one, value);
    if (outcome === "outside") {
      var away = value - one.value;
      parts.push(element("span", "say-stop", "OUTSIDE: " + spread(key, Math.abs(away)) + " " + kind(key).spread + (away > 0 ? " above" : " below")));
    } else if (outcome) {
      parts.push(element("span", WORDS[outcome][0], WORDS[outcome][1]));
    }
    if (outcome) { row.setAttribute("data-outcome", outcome); }
    return { parts: parts, outcome: outcome };
  }

  function sayCondition(expectation, humidity) {
    var names = expectation.keys ? expectation.keys.map(small).join(", ") : "", parts = [];
    if (expectation.why === "lacking") {
      var told = expectation.keys.length === 1 && ["compressor_speed", "compressor_stage"].indexOf(expectation.keys[0]) >= 0;
      parts.push(element("p", "", told && ticked("unknown-" + expectation.keys[0])
        ? "Without the " + names + " the page expects nothing: when the record is filed it is inferred from the power."
        : "Type " + names + ": without that nothing can be expected."));
    } else if (expectation.why === "no step") {
      parts.push(element("p", "say-open", "There is no such " + names + ": its steps are " + data.expected.steps.at.map(function (x) {
        return show(expectation.keys[0], x) + " " + kind(expectation.keys[0]).shown;
      }).join(", ") + "."));
    } else if (expectation.why === "beyond") {
      parts.push(element("p", "say-open", "Outside what was tabulated: " + names + ". Nothing is shown; the record is judged when it is filed."));
    } else if (expectation.why === "no balance") {
      parts.push(element("p", "say-open", "Outside what was tabulated: the plant has no balance near this condition, or none that can be shown here."));
    } else if (expectation.regime) {
      var words = "Expected: " + expectation.regime + (expectation.change ? ", close to where that changes" : "") + ".";
      if (expectation.missing.length) { words += " Not known and taken as designed: " + expectation.missing.map(small).join(", ") + "."; }
      parts.push(element("p", "", words));
    }
    if (humidity !== null) {
      parts.push(element("p", "", label(data.air.humidity) + " " + show(data.air.humidity, humidity) + " " + kind(data.air.humidity).shown + ", from the wet bulb."));
    }
    fill(by("live-condition"), parts);
  }

  function checkNumbers() {
    fields.forEach(function (one) {
      if (one.hasAttribute("data-number")) {
        var wrong = isNaN(number(one.value) === null ? 0 : number(one.value));
        one.setAttribute("aria-invalid", String(wrong));
      }
    });
  }

  function update() {
    checkNumbers();
    var have = conditions(), read = readings(), humidity = fromBulbs(have, read);
    if (humidity !== null) { have[data.air.humidity] = humidity; }
    var expectation = table.expect(have);
    var still = steadiness(), changed = changedInstruments(), test = mode() === "test";
    // Bands are those of the instruments that the page names: with others, the record is judged when it is filed.
    var conditionChanged = humidity !== null || changed.some(function (key) { return data.conditions.indexOf(key) >= 0; });
    var state = {
      test: test, steady: still.steady,
      other: function (key) { return conditionChanged || [key].concat(NEEDS[key] || []).some(function (k) { return changed.indexOf(k) >= 0; }); }
    };
    Object.keys(read).forEach(function (key) { have[key] = read[key]; });
    var derived = table.derive(have, expectation);
    var count = { read: 0, inside: 0, outside: [], later: 0 };
    data.readings.concat(data.derived).forEach(function (key) {
      var direct = data.readings.indexOf(key) >= 0, value = direct ? read[key] : derived[key];
      value = value === undefined ? null : value;
      if (!direct) { by("d-" + key).textContent = value === null ? "\u2013" : show(key, value) + " " + kind(key).shown; }
      var said = judged(key, value, expectation, state);
      fill(by("o-" + key), said.parts);
      count.read += direct && value !== null ? 1 : 0;
      count.inside += said.outcome === "inside" ? 1 : 0;
      count.later += said.outcome === "edge" || said.outcome === "filed" ? 1 : 0;
      if (said.outcome === "outside") { count.outside.push(label(key)); }
    });
    sayCondition(expectation, humidity);
    sayBarometer();
    by("live-steady").textContent = still.text;
    by("live-mode").textContent = test
      ? "Test: witnessed, one verdict, kept. What is expected shows once a reading is typed."
      : "Trim: deviations only, as often as you like.";
    summarise(count, expectation);
    warnCalibration();
    keep();
  }

  function sayBarometer() {
    var hectopascal = number(typed("v-barometric_pressure")), place = by("o-barometric_pressure");
    var wrong = hectopascal !== null && !(hectopascal >= 500 && hectopascal <= 1100);
    fill(place, wrong
      ? [element("span", "say-stop", "no barometer on a site shows this: write the pressure of the air itself, not reduced to sea level")]
      : [element("span", "soft", "gauges count from " + commissionDecision.fixed(barometer() / 100, 0) + " hPa")]);
  }

  function warnCalibration() {
    var day = typed("started").slice(0, 10);
    data.conditions.concat(data.readings).forEach(function (key) {
      var one = field("i-" + key), place = form.querySelector("[data-with='" + key + "']");
      if (!one || !place) { return; }
      var until = data.until[one.value];
      place.textContent = (one.value ? ": " + one.value : "") + (day && until && until < day ? ", calibration ended " + until : "");
      place.className = day && until && until < day ? "say-stop" : "";
    });
  }

  function summarise(count, expectation) {
    var parts = [element("span", "", count.read + " read")];
    if (expectation.values) {
      parts.push(element("span", count.inside ? "say-good" : "soft", count.inside + " inside"));
      parts.push(element("span", count.outside.length ? "say-stop" : "soft", count.outside.length + " outside" + (count.outside.length && count.outside.length < 3 ? ": " + count.outside.join(", ") : "")));
      if (count.later) { parts.push(element("span", "say-open", count.later + " decided when filed")); }
    } else {
      parts.push(element("span", "soft", "nothing expected yet"));
    }
    fill(by("live-summary"), parts);
  }

  // What was typed survives a reload, as far as the browser keeps anything.
  function keep() {
    var state = {}, kept = true;
    fields.forEach(function (one) {
      if (one.type === "radio") { if (one.checked) { state[one.getAttribute("data-field")] = one.value; } }
      else if (one.type === "checkbox") { state[one.getAttribute("data-field")] = one.checked; }
      else { state[one.getAttribute("data-field")] = one.value; }
    });
    try {
      window.localStorage.setItem(store, JSON.stringify(state));
    } catch (error) {
      kept = false; // storage is switched off or full: said on the page
    }
    by("live-kept").textContent = kept
      ? "What is typed here stays on this device until you start a new sheet."
      : "This browser keeps nothing: save the record before you close the page, or what is typed is lost.";
    by("live-kept").className = kept ? "small soft off-paper" : "say-open off-paper";
  }
  function restore() {
    var state = null;
    try {
      state = JSON.parse(window.localStorage.getItem(store));
    } catch (error) {
      state = null; // nothing kept, or not readable: the sheet starts empty
    }
    if (!state || typeof state !== "object") { return; }
    fields.forEach(function (one) {
      var value = state[one.getAttribute("data-field")];
      if (value === undefined) { return; }
      if (one.type === "radio") { one.checked = one.value === value; }
      else if (one.type === "checkbox") { one.checked = value === true; }
      else if (one.tagName !== "SELECT" || Array.prototype.some.call(one.options, function (o) { return o.value === value; })) { one.value = value; }
    });
  }

  function collected() {
    var unknown = [];
    function rows(keys) {
      return keys.filter(function (key) {
        var shown = number(typed("v-" + key));
        return !ticked("unknown-" + key) && shown !== null && !isNaN(shown);
      }).map(function (key) {
        var instrument = typed("i-" + key) || (field("i-" + key) ? "" : data.instruments[key] || "");
        return { key: key, value: plain(typed("v-" + key)) + " " + (kind(key).unit || ""), instrument: instrument, where: typed("w-" + key) };
      });
    }
    form.querySelectorAll("input[type=checkbox]").forEach(function (one) {
      if (one.checked) { unknown.push(one.getAttribute("data-field").replace("unknown-", "")); }
    });
    var asked = rows(data.conditions.concat(data.underConditions)), air = typed("v-barometric_pressure");
    if (air && barometer() !== data.barometer) { asked.push({ key: "barometric_pressure", value: plain(air) + " mbar a" }); }
    var remarks = typed("remarks");
    if (unknown.length) {
      remarks += (remarks ? "\n" : "") + "Not known: " + unknown.map(function (k) { return data.quantities[k] ? small(k) : "time " + k.replace("-", " "); }).join(", ") + ".";
    }
    return {
      plant: data.plant, digest: data.digest, system: data.system, stage: typed("stage"), mode: mode(), started: typed("started"),
      title: "Day sheet", sinceStart: minutes("since-start"), sinceDefrost: minutes("since-defrost"),
      operator: { name: typed("operator"), firm: typed("operator-firm"), certificate: typed("operator-certificate") },
      witness: { name: typed("witness"), firm: typed("witness-firm") },
      conditions: asked, readings: rows(data.readings.filter(function (key) { return data.underConditions.indexOf(key) < 0; })), frozen: typed("frozen"), remarks: remarks
    };
    function minutes(name) {
      var n = ticked("unknown-" + name) ? null : number(typed(name));
      return n === null || isNaN(n) ? "" : plain(typed(name));
    }
  }

  // What a record cannot do without, as links to the fields; empty when it is complete.
  function missing() {
    var found = [];
    function want(id, words) { found.push([id, words]); }
    if (!typed("started")) { want("f-started", "Start of reading: when was it?"); }
    if (!typed("operator")) { want("f-operator", "Operator: who reads?"); }
    if (mode() === "test" && !typed("witness")) { want("f-witness", "Witness: a test is witnessed."); }
    fields.forEach(function (one) {
      if (one.getAttribute("aria-invalid") === "true") { want(one.id, "\u201c" + one.value + "\u201d is no number."); }
    });
    fill(by("live-missing"), found.map(function (one) {
      var item = document.createElement("li"), link = element("a", "", one[1]);
      link.href = "#" + one[0];
      link.addEventListener("click", function (event) { event.preventDefault(); by(one[0]).focus(); });
      item.appendChild(link);
      return item;
    }));
    by("live-missing").hidden = !found.length;
    return found.length > 0;
  }

  function asText() { return commissionLiveExport.record(collected()); }
  function save() {
    if (missing()) { by("live-saved").textContent = "Not saved yet: see what is missing."; return; }
    var sheet = collected(), link = document.createElement("a");
    link.href = URL.createObjectURL(new Blob([asText()], { type: "application/yaml" }));
    link.download = commissionLiveExport.fileName(sheet);
    link.click();
    window.setTimeout(function () { URL.revokeObjectURL(link.href); }, 60000);
    by("live-saved").textContent = "Saved as " + link.download + ". If the device saved no file, show it as text and copy it.";
  }

  // The instruments of the plant that measure this kind of quantity, the one that is meant first.
  function offerInstruments() {
    form.querySelectorAll("[data-instrument]").forEach(function (select) {
      var key = select.getAttribute("data-instrument"), meant = data.instruments[key] || "";
      [meant].concat(data.choices[data.quantities[key].kind].filter(function (name) { return name !== meant; })).forEach(function (name) {
        var option = element("option", "", name || "not stated");
        option.value = name;
        select.appendChild(option);
      });
    });
  }

  function setUp() {
    form.hidden = false;
    offerInstruments();
    restore();
    form.addEventListener("input", update);
    form.addEventListener("change", update);
    form.addEventListener("submit", function (event) { event.preventDefault(); });
    form.querySelectorAll("[data-sign]").forEach(function (button) {
      button.addEventListener("click", function () {
        var one = by(button.getAttribute("data-sign")), words = one.value.trim();
        one.value = /^[-\u2212\u2013]/.test(words) ? words.slice(1) : "\u2212" + words;
        one.focus();
        update();
      });
    });
    form.querySelectorAll("[data-now]").forEach(function (button) {
      button.addEventListener("click", function () {
        var now = new Date(), local = new Date(now.getTime() - now.getTimezoneOffset() * 60000);
        by(button.getAttribute("data-now")).value = local.toISOString().slice(0, 16);
        update();
      });
    });
    by("live-save").addEventListener("click", save);
    by("live-text").addEventListener("click", function () {
      by("live-copy").hidden = missing();
      by("live-yaml").value = by("live-copy").hidden ? "" : asText();
      if (!by("live-copy").hidden) { by("live-yaml").focus(); by("live-yaml").select(); }
    });
    by("live-new").addEventListener("click", function () {
      var button = by("live-new");
      if (button.getAttribute("data-sure") !== "yes") {
        button.setAttribute("data-sure", "yes");
        button.textContent = "Press again: everything typed is cleared";
        return;
      }
      form.reset();
      button.removeAttribute("data-sure");
      button.textContent = "Start a new sheet";
      by("live-copy").hidden = true;
      by("live-saved").textContent = "";
      update();
    });
    update();
  }

  var failed = commissionDecision.selfTest(commissionDecisionVectors);
  if (failed.length) {
    by("live-fault-what").textContent = failed.join(", ");
    by("live-fault").hidden = false;
  } else {
    setUp();
  }
}());
