/* Conformity and significance, the same rule as commission/acceptance/decision.py (JCGM 106:2012).
   One file of vectors holds the two together; change neither alone. Classic script, no dependency. */
var commissionDecision = (function () {
  "use strict";
  var ROUNDING = 1e-9;

  function normalCdf(z) {
    /* erf by its all-positive series (DLMF 7.6.2); beyond 8 the rest is below 1e-15. */
    if (z > 8) { return 1; }
    if (z < -8) { return 0; }
    var x = z / Math.SQRT2, term = x, sum = x, n;
    for (n = 1; n < 300; n += 1) {
      term *= 2 * x * x / (2 * n + 1);
      sum += term;
      if (Math.abs(term) < 1e-17 * Math.abs(sum)) { break; }
    }
    return 0.5 + Math.exp(-x * x) * sum / Math.sqrt(Math.PI);
  }

  function normalQuantile(p) {
    var low = -8, high = 8, middle, i;
    if (!(p > 0 && p < 1)) { throw new Error("a probability between 0 and 1 is wanted, not " + p); }
    for (i = 0; i < 80; i += 1) {
      middle = (low + high) / 2;
      if (normalCdf(middle) < p) { low = middle; } else { high = middle; }
    }
    return (low + high) / 2;
  }

  function above(a, b) { return a > b + ROUNDING * Math.abs(b); }

  function probability(value, u, lower, upper) {
    if (u === 0) { return (lower === null || value >= lower) && (upper === null || value <= upper) ? 1 : 0; }
    var high = upper === null ? 1 : normalCdf((upper - value) / u);
    var low = lower === null ? 0 : normalCdf((lower - value) / u);
    return Math.max(0, high - low);
  }

  function check(value, u, lower, upper, confidence) {
    if (lower === null && upper === null) { throw new Error("without a limit there is nothing to decide"); }
    if (![value, u, lower === null ? 0 : lower, upper === null ? 0 : upper].every(Number.isFinite) || u < 0) {
      throw new Error("finite numbers and an uncertainty of zero or more are wanted");
    }
    if (lower !== null && upper !== null && lower > upper) { throw new Error("the limits are crossed"); }
    if (!(confidence > 0.5 && confidence < 1)) { throw new Error("a confidence between 0.5 and 1 is wanted"); }
  }

  /* value, u, lower, upper (null where there is none), rule "simple" or "guarded", confidence, largest
     expanded uncertainty (null where none is agreed). */
  function decide(value, u, lower, upper, rule, confidence, largest) {
    check(value, u, lower, upper, confidence);
    var k = normalQuantile(confidence), k2 = normalQuantile(0.5 + confidence / 2);
    var capable = largest === null || !above(k2 * u, largest);
    var guard = rule === "simple" && capable ? 0 : k * u;
    var below = lower === null ? Infinity : value - lower, over = upper === null ? Infinity : upper - value;
    var margin = Math.min(below, over), limit = below <= over ? lower : upper;
    var slack = ROUNDING * Math.max(Math.abs(value), Math.abs(limit));
    var outcome = "undecided", needed = null;
    if (margin >= guard - slack) { outcome = "conforming"; }
    else if (margin < -slack && -margin >= guard - slack) { outcome = "not conforming"; }
    if (outcome === "undecided") {
      needed = Math.abs(margin) / k;
      if (rule === "simple" && largest !== null) { needed = Math.max(needed, largest / k2); }
    }
    return {
      outcome: outcome, probability: probability(value, u, lower, upper), capable: capable,
      acceptanceLow: lower === null ? null : lower + guard, acceptanceHigh: upper === null ? null : upper - guard,
      uncertaintyNeeded: needed || null
    };
  }

  function significant(deviation, u, confidence) {
    return above(Math.abs(deviation), normalQuantile(0.5 + confidence / 2) * u);
  }

  /* Halves away from zero and no negative zero: toFixed works on the exact value, as the Python side does. */
  function fixed(value, digits) {
    var text = value.toFixed(digits);
    return Number(text) === 0 ? text.replace("-", "") : text;
  }

  function same(a, b) {
    if (typeof a !== "number" || typeof b !== "number") { return a === b; }
    return Math.abs(a - b) <= 1e-9 * Math.max(1, Math.abs(a), Math.abs(b));
  }

  /* The names of the vectors that this script does not answer as written; an empty list is a pass. */
  function selfTest(vectors) {
    var failed = [];
    vectors.decide.forEach(function (v) {
      var answer = decide.apply(null, v.arguments);
      if (!Object.keys(v.answer).every(function (key) { return same(answer[key], v.answer[key]); })) { failed.push(v.name); }
    });
    vectors.significant.forEach(function (v) {
      if (significant.apply(null, v.arguments) !== v.answer) { failed.push(v.name); }
    });
    vectors.fixed.forEach(function (v) {
      if (fixed.apply(null, v.arguments) !== v.answer) { failed.push(v.name); }
    });
    return failed;
  }

  return { decide: decide, significant: significant, fixed: fixed, selfTest: selfTest };
}());
