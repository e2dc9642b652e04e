// Search without a server: the index is a classic script, loaded on first use; every word must occur.
(function () {
  "use strict";
  var field = document.getElementById("search-words");
  var list = document.getElementById("search-results");
  var state = document.getElementById("search-state");
  var source = field.getAttribute("data-index");
  var base = field.getAttribute("data-base");
  var rows = null;
  var loading = false;
  var LIMIT = 50;

  function load() {
    if (rows || loading) {
      return;
    }
    loading = true;
    var script = document.createElement("script");
    script.src = source;
    script.onload = function () {
      rows = window.MANUAL_INDEX.map(function (row) {
        return {
          path: row[0], title: row[1], kicker: row[2], headings: row[3], text: row[4],
          all: (row[1] + " " + row[2] + " " + row[3].join(" ") + " " + row[4] + " " + row[5]).toLowerCase(),
          head: (row[1] + " " + row[2] + " " + row[3].join(" ")).toLowerCase()
        };
      });
      run();
    };
    script.onerror = function () {
      loading = false;
      state.textContent = "The index of this manual is missing: search-index.js does not open.";
    };
    document.head.appendChild(script);
  }

  function count(row, words) {
    var score = 0;
    for (var i = 0; i < words.length; i += 1) {
      if (row.all.indexOf(words[i]) < 0) {
        return -1;
      }
      if (row.head.indexOf(words[i]) >= 0) {
        score += 1;
      }
    }
    return score;
  }

  function show(found) {
    list.textContent = "";
    found.slice(0, LIMIT).forEach(function (hit) {
      var item = document.createElement("li");
      var link = document.createElement("a");
      link.href = base + "/" + hit.row.path;
      link.textContent = hit.row.title;
      item.appendChild(link);
      if (hit.row.kicker) {
        var kicker = document.createElement("span");
        kicker.className = "kicker";
        kicker.textContent = hit.row.kicker;
        item.appendChild(kicker);
      }
      var text = document.createElement("p");
      text.textContent = hit.row.text;
      item.appendChild(text);
      list.appendChild(item);
    });
  }

  function run() {
    var words = field.value.toLowerCase().split(/\s+/).filter(Boolean);
    if (!words.length) {
      list.textContent = "";
      state.textContent = "";
      return;
    }
    if (!rows) {
      load();
      return;
    }
    var found = [];
    rows.forEach(function (row) {
      var score = count(row, words);
      if (score >= 0) {
        found.push({ row: row, score: score });
      }
    });
    found.sort(function (a, b) {
      return b.score - a.score || a.row.title.length - b.row.title.length; // the title nearest to the words
    });
    show(found);
    state.textContent = found.length === 0 ? "No page holds all of these words."
      : found.length === 1 ? "One page." : found.length + " pages.";
  }

  field.addEventListener("focus", load);
  field.addEventListener("input", run);
  field.focus();
})();
