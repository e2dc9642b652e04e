// Runs before the page is drawn: marks that scripts run, and applies the light or dark choice of this device.
(function () {
  "use strict";
  var root = document.documentElement;
  root.classList.add("js");
  var choice = null;
  try {
    choice = window.localStorage.getItem("commission.theme");
  } catch (error) {
    choice = null; // storage is switched off: the device's own setting counts
  }
  if (choice === "light" || choice === "dark") {
    root.setAttribute("data-theme", choice);
  }
})();
