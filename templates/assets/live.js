// Works the card out while it is typed: sends the form as the button "Work it out" does and puts the answer's figures and
// workings in place. Without it the button does the same.
"use strict";
(function () {
  var form = document.getElementById("card");
  var live = document.getElementById("live");
  if (!form || !live || !window.fetch || !window.DOMParser || !window.AbortController) return;
  var timer = 0;
  var running = null;
  function put(id, from) {
    var here = document.getElementById(id);
    var there = from.getElementById(id);
    if (!here || !there) return;
    here.replaceChildren.apply(here, Array.prototype.map.call(there.childNodes, function (node) {
      return document.importNode(node, true);
    }));
  }
  function work() {
    if (running) running.abort();
    running = new AbortController();
    var data = new URLSearchParams(new FormData(form));
    data.set("do", "try");
    fetch(form.getAttribute("action"), { method: "POST", body: data, headers: { Accept: "text/html" }, signal: running.signal })
      .then(function (answer) { return answer.text(); })
      .then(function (text) {
        var page = new DOMParser().parseFromString(text, "text/html");
        var refused = page.querySelector("#refused h2");
        if (refused) {
          live.textContent = refused.textContent + ".";
          return;
        }
        put("live", page);
        form.querySelectorAll("[data-live]").forEach(function (part) { put(part.id, page); });
      })
      .catch(function () { /* The button is still there. */ });
  }
  form.addEventListener("input", function (event) {
    if (event.target.name === "why" || event.target.name === "add-as") return;
    window.clearTimeout(timer);
    timer = window.setTimeout(work, 900);
  });
})();
