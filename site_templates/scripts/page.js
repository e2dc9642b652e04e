// Small helps of every page: the list of pages, light and dark, opening all rows, printing, linked rows.
(function () {
  "use strict";
  var root = document.documentElement;

  function isDark() {
    var choice = root.getAttribute("data-theme");
    if (choice) {
      return choice === "dark";
    }
    return window.matchMedia("(prefers-color-scheme: dark)").matches;
  }

  function setUpTheme() {
    var button = document.getElementById("theme-button");
    if (!button) {
      return;
    }
    function label() {
      button.textContent = isDark() ? "Light" : "Dark";
      button.setAttribute("aria-label", isDark() ? "Switch to light colours" : "Switch to dark colours");
    }
    button.hidden = false;
    label();
    button.addEventListener("click", function () {
      var next = isDark() ? "light" : "dark";
      root.setAttribute("data-theme", next);
      try {
        window.localStorage.setItem("commission.theme", next);
      } catch (error) {
        // storage is switched off: the choice holds for this page only
      }
      label();
    });
  }

  function setUpPages() {
    var button = document.getElementById("pages-button");
    if (!button) {
      return;
    }
    button.hidden = false;
    button.addEventListener("click", function () {
      var open = root.classList.toggle("pages-open");
      button.setAttribute("aria-expanded", String(open));
      if (open) {
        var first = document.querySelector("#pages a");
        if (first) {
          first.focus();
        }
      }
    });
    document.addEventListener("keydown", function (event) {
      if (event.key === "Escape" && root.classList.contains("pages-open")) {
        root.classList.remove("pages-open");
        button.setAttribute("aria-expanded", "false");
        button.focus();
      }
    });
  }

  function setUpRows() {
    Array.prototype.forEach.call(document.querySelectorAll("[data-open-all]"), function (button) {
      button.hidden = false;
      button.addEventListener("click", function () {
        var open = button.getAttribute("aria-pressed") !== "true";
        button.setAttribute("aria-pressed", String(open));
        button.textContent = open ? "Close all rows" : "Open all rows";
        Array.prototype.forEach.call(document.querySelectorAll("main details"), function (row) {
          row.open = open;
        });
      });
    });
    Array.prototype.forEach.call(document.querySelectorAll("[data-print]"), function (button) {
      button.hidden = false;
      button.addEventListener("click", function () {
        window.print();
      });
    });
  }

  function openLinkedRow() {
    var name = decodeURIComponent(window.location.hash.slice(1));
    var target = name && document.getElementById(name);
    if (!target) {
      return;
    }
    if (target.tagName === "DETAILS") {
      target.open = true;
    }
    target.scrollIntoView();
  }

  function markOverdue() {
    var now = new Date();
    var today = [now.getFullYear(), String(now.getMonth() + 1).padStart(2, "0"), String(now.getDate()).padStart(2, "0")].join("-");
    Array.prototype.forEach.call(document.querySelectorAll("[data-until]"), function (place) {
      if (place.getAttribute("data-until") >= today) {
        return;
      }
      if (place.hidden) {
        place.hidden = false;
        return;
      }
      var word = document.createElement("strong");
      word.className = "say-stop";
      word.textContent = " overdue";
      place.appendChild(word);
    });
  }

  markOverdue();
  setUpTheme();
  setUpPages();
  setUpRows();
  openLinkedRow();
  window.addEventListener("hashchange", openLinkedRow);
})();
