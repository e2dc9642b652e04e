/* The record of a visit as YAML, in the form that `commission record` and `commission compare` read. Text is written as
   JSON strings, which are YAML too, so that no sign in it can be mistaken. Classic script, no dependency. */
var commissionLiveExport = (function () {
  "use strict";

  function text(words) { return JSON.stringify(words); }

  function person(one) {
    var parts = ["name", "firm", "certificate"].filter(function (k) { return one[k]; }).map(function (k) { return k + ": " + text(one[k]); });
    return "{" + parts.join(", ") + "}";
  }

  function section(name, rows) {
    if (!rows.length) { return [name + ": {}"]; }
    return [name + ":"].concat(rows.map(function (row) {
      var parts = ["value: " + text(row.value)];
      if (row.instrument) { parts.push("instrument: " + text(row.instrument)); }
      if (row.where) { parts.push("where: " + text(row.where)); }
      return "  " + row.key + ": {" + parts.join(", ") + "}";
    }));
  }

  /* A moment of this device's clock with its zone, from the value of a datetime-local field. */
  function moment(local) {
    var at = new Date(local), minutes = -at.getTimezoneOffset(), size = Math.abs(minutes);
    function two(n) { return String(n).padStart(2, "0"); }
    return local + (minutes < 0 ? "-" : "+") + two(Math.floor(size / 60)) + ":" + two(size % 60);
  }

  /* The whole record. */
  function record(sheet) {
    var lines = ["# From the live day sheet of " + sheet.plant.replace(/\s+/g, " ") + ", description " + sheet.digest + "."];
    lines.push("# See what it says: commission compare PLANT THIS_FILE    File it for good: commission record PLANT THIS_FILE");
    if (sheet.title) { lines.push("title: " + text(sheet.title)); }
    lines.push("system: " + text(sheet.system), "stage: " + text(sheet.stage), "mode: " + sheet.mode, "started: " + text(moment(sheet.started)));
    if (sheet.ended) { lines.push("ended: " + text(moment(sheet.ended))); }
    if (sheet.sinceStart) { lines.push("since_start: " + text(sheet.sinceStart + " min")); }
    if (sheet.sinceDefrost) { lines.push("since_defrost: " + text(sheet.sinceDefrost + " min")); }
    lines.push("people:", "  operator: " + person(sheet.operator));
    if (sheet.witness.name) { lines.push("  witness: " + person(sheet.witness)); }
    lines = lines.concat(section("conditions", sheet.conditions), section("readings", sheet.readings));
    if (sheet.frozen) { lines.push("sheet: " + text(sheet.frozen)); }
    if (sheet.remarks) { lines.push("remarks: " + text(sheet.remarks)); }
    return lines.join("\n") + "\n";
  }

  function fileName(sheet) {
    return sheet.started.slice(0, 10) + "-" + sheet.system.toLowerCase().replace(/[^a-z0-9]+/g, "-") + "-" + sheet.stage + ".yaml";
  }

  return { record: record, fileName: fileName };
}());
