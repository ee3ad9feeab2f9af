// What a pointer or the keyboard is over is told in a line at the foot of the window: the exact values that stand in titles. Without this
// script the titles show by themselves.
(function () {
	"use strict";
	var readout = document.createElement("output");
	readout.className = "readout";
	readout.id = "readout";
	readout.hidden = true;
	document.body.appendChild(readout);

	function move(element, words) {
		element.setAttribute("data-exact", words);
		if (element.namespaceURI === "http://www.w3.org/2000/svg") {
			element.setAttribute("aria-label", words);
		} else {
			element.removeAttribute("title");
			element.tabIndex = 0;
		}
	}

	document.querySelectorAll("tr[title]").forEach(function (row) {
		move(row, row.title);
	});
	// Of pictures: what is inside a trace, a region or a block; a picture's own title stays.
	document.querySelectorAll("svg * > title").forEach(function (title) {
		move(title.parentNode, title.textContent);
		title.remove();
	});

	// A box for each trace of a picture, to put it away and to show it again.
	document.querySelectorAll("figure.picture").forEach(function (figure) {
		var traces = figure.querySelectorAll("g.trace[data-trace]");
		if (traces.length === 0) {
			return;
		}
		var controls = document.createElement("fieldset");
		var legend = document.createElement("legend");
		controls.className = "controls";
		legend.textContent = "Show";
		controls.appendChild(legend);
		traces.forEach(function (trace) {
			var label = document.createElement("label");
			var box = document.createElement("input");
			box.type = "checkbox";
			box.checked = true;
			box.addEventListener("change", function () {
				trace.classList.toggle("away", !box.checked);
			});
			label.appendChild(box);
			label.appendChild(document.createTextNode(" " + trace.getAttribute("data-trace")));
			controls.appendChild(label);
		});
		figure.insertBefore(controls, figure.firstChild);
	});

	function show(event) {
		var element = event.target.closest ? event.target.closest("[data-exact]") : null;
		readout.hidden = element === null;
		readout.textContent = element === null ? "" : element.getAttribute("data-exact");
	}
	document.addEventListener("pointerover", show);
	document.addEventListener("focusin", show);
	document.addEventListener("keydown", function (event) {
		if (event.key === "Escape") {
			readout.hidden = true;
		}
	});
}());
