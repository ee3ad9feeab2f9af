"""Opens build sheets in a headless Chromium.

	sheet_browser.py quiet PAGE ...     no message on the console, no request but for the page, none by the page in the network's log, and
	                                    nothing in its markup that could ask
	sheet_browser.py fits PAGE ...      nothing is wider than the window at 390, 1280 and 1920 pixels but tables, which scroll, and
	                                    nothing wider than the paper on A4 and Letter; light and dark differ
	sheet_browser.py prints PAGE ...    PDF on A4 and Letter: every row of every table is whole on one page
	sheet_browser.py tells PAGE CHECK PROOFS   a pointer over rows shows the values of those JSON reports
	sheet_browser.py harmless PAGE TITLE   the page has that title, though the plan's words would set another
	sheet_browser.py looks PAGE FOLDER  pictures of the page, for eyes

Prints what is wrong, and fails then."""

import json
import os
import re
import subprocess
import sys
import tempfile
import xml.etree.ElementTree as ElementTree

from browser import Browser

XHTML = "{http://www.w3.org/1999/xhtml}"
PAPERS = {"A4": (210 / 25.4, 297 / 25.4), "Letter": (8.5, 11)}
SIDES_MM = 24 # left and right margin of the page together, as its style has it
PIXELS_PER_INCH = 96 # of CSS
faults = []


def fault(*words):
	faults.append(" ".join(str(word) for word in words))


def url_of(page):
	return "file://" + os.path.abspath(page)


def check_events(page, events):
	"""What the page asked for, and what was said of it."""
	asked = [event["params"]["request"]["url"] for event in events if event["method"] == "Network.requestWillBeSent"]
	if asked != [url_of(page)]:
		fault(page, "requests:", asked)
	for event in events:
		if event["method"] in ("Runtime.consoleAPICalled", "Log.entryAdded", "Runtime.exceptionThrown", "Page.javascriptDialogOpening"):
			fault(page, event["method"], json.dumps(event["params"])[:300])


def check_net_log(path):
	"""The browser's own log of its network. What it asks for on its own account has no origin, and is stopped by its flags; what a page asks
	for has the page's."""
	with open(path, encoding="utf-8") as file:
		log = json.load(file)
	kinds = {number: name for name, number in log["constants"]["logEventTypes"].items()}
	for event in log["events"]:
		asked = event.get("params", {})
		if kinds[event["type"]] == "URL_REQUEST_START_JOB" and asked.get("initiator", "not an origin") != "not an origin":
			fault("network:", asked["url"], "asked for by", asked["initiator"])


LOADING = ("src", "href", "{http://www.w3.org/1999/xlink}href", "srcset", "data", "action", "formaction", "poster", "background", "ping", "manifest")


def check_markup(page):
	"""Nothing in the page names anything but the page: no attribute that loads or leads elsewhere, no such rule of style."""
	for element in ElementTree.parse(page).iter():
		for name in LOADING:
			if not element.get(name, "#").startswith("#"):
				fault(page, "leads elsewhere:", element.tag, name, element.get(name))
		for style in [element.get("style", "")] + ([element.text or ""] if element.tag.endswith("}style") else []):
			if re.search(r"@import|url\((?!#)", style):
				fault(page, "a style loads:", style[:80])
		if element.tag.endswith(("}link", "}base", "}iframe", "}object", "}embed", "}img")):
			fault(page, "an element that loads:", element.tag)


def quiet(pages):
	with tempfile.TemporaryDirectory() as folder:
		log = os.path.join(folder, "net.json")
		browser = Browser(log)
		try:
			for page in pages:
				check_markup(page)
				browser.open(url_of(page))
				# Everything that a reader does: scrolls, points, folds.
				browser.value("window.scrollTo(0, document.body.scrollHeight)")
				browser.hover(200, 200)
				browser.settle()
				check_events(page, browser.events)
		finally:
			browser.close()
		check_net_log(log)


# An element that sticks out of what holds it; tables on screens stand in a box that scrolls.
TOO_WIDE = """Array.from(document.querySelectorAll("body *")).filter(element => {
	const box = element.getBoundingClientRect();
	return box.width > 0 && (box.right > document.documentElement.clientWidth + 1 || box.left < -1) && %s;
}).slice(0, 5).map(element => element.tagName + "." + element.className + " " + element.textContent.slice(0, 60))"""


def check_screen(browser, page, width):
	browser.size(width, 1000)
	wide = browser.value(TOO_WIDE % "element.closest('.wide, .picture') === null && element.closest('.readout') === null")
	if wide or browser.value("document.documentElement.scrollWidth") > width:
		fault(page, f"wider than {width} pixels:", wide)


def check_paper(browser, page, name):
	width = round((PAPERS[name][0] - SIDES_MM / 25.4) * PIXELS_PER_INCH)
	browser.size(width, 1000, media="print")
	wide = browser.value(TOO_WIDE % "true")
	if wide:
		fault(page, f"wider than {name}:", wide)
	if browser.value("Array.from(document.querySelectorAll('.wide')).some(box => box.scrollWidth > box.clientWidth + 1)"):
		fault(page, f"a table is cut on {name}")


def check_dark(browser, page):
	colours = []
	for dark in (False, True):
		browser.size(1280, 1000, dark=dark)
		colours.append(browser.value("[getComputedStyle(document.body).color, getComputedStyle(document.documentElement).backgroundColor]"))
	if colours[0] == colours[1] or colours[0][0] == colours[0][1] or colours[1][0] == colours[1][1]:
		fault(page, "light and dark:", colours)


def fits(pages):
	browser = Browser()
	try:
		for page in pages:
			browser.open(url_of(page))
			for width in (390, 1280, 1920):
				check_screen(browser, page, width)
			for name in PAPERS:
				check_paper(browser, page, name)
			check_dark(browser, page)
	finally:
		browser.close()


def joined(text):
	"""Without blanks: lines may be broken anywhere between words."""
	return re.sub(r"\s+", "", text)


def table_rows(page):
	"""The text of each row of each table, cells one after the other, as they are painted."""
	return [joined("".join(row.itertext())) for table in ElementTree.parse(page).iter(XHTML + "table")
		for row in table.iter(XHTML + "tr") if row.find(XHTML + "td") is not None]


def whole_tables(page):
	"""The bodies of tables that are meant to be on one page each."""
	for table in ElementTree.parse(page).iter(XHTML + "table"):
		if table.get("class").split()[0] in ("package", "nets", "counts", "regions", "burn", "banks", "blocks"):
			yield joined("".join(table.find(XHTML + "tbody").itertext()))


def check_sides(page, pdf, name):
	"""No word lies outside the margins of its page, which has the size of the paper."""
	text = subprocess.run(["pdftotext", "-bbox", pdf, "-"], check=True, capture_output=True).stdout.decode()
	for sheet in ElementTree.fromstring(re.sub(r"<!DOCTYPE[^>]*>", "", text)).iter(XHTML + "page"):
		width = float(sheet.get("width"))
		if min(abs(width - side * 72) for side in PAPERS[name]) > 1: # pictures lie across
			fault(page, f"{name}: a page is {width} points wide")
		for word in sheet.iter(XHTML + "word"):
			if float(word.get("xMin")) < 20 or float(word.get("xMax")) > width - 20:
				fault(page, f"{name}: \"{word.text}\" is cut at the side")


def check_pdf(page, pdf, name):
	check_sides(page, pdf, name)
	text = subprocess.run(["pdftotext", "-raw", pdf, "-"], check=True, capture_output=True).stdout.decode()
	papers = [joined(paper) for paper in text.split("\f")]
	for row in table_rows(page):
		if not any(row in paper for paper in papers):
			fault(page, f"{name}: a row is on no page whole:", row[:100])
	for table in whole_tables(page):
		if not any(table in paper for paper in papers):
			fault(page, f"{name}: a table is on no page whole:", table[:100])


def prints(pages):
	browser = Browser()
	with tempfile.TemporaryDirectory() as folder:
		try:
			for page in pages:
				browser.open(url_of(page))
				for name, size in PAPERS.items():
					pdf = os.path.join(folder, name + ".pdf")
					browser.pdf(pdf, *size)
					check_pdf(page, pdf, name)
		finally:
			browser.close()


def readout_over(browser, selector, index):
	"""What the page tells while the pointer is over an element: so many of a selector, or without that an expression."""
	element = f"document.querySelectorAll({json.dumps(selector)})[{index}]" if selector else index
	box = browser.value(f"""(() => {{ const element = {element};
		element.scrollIntoView({{block: "center"}}); const box = element.getBoundingClientRect();
		return [box.left + Math.min(box.width, 60) / 2, box.top + Math.min(box.height, 60) / 2]; }})()""")
	browser.hover(1, 1)
	browser.hover(*box)
	return browser.value("(() => { const readout = document.getElementById('readout'); return readout.hidden ? '' : readout.textContent; })()")


def check_regions(browser, report):
	index = 0
	for line in report["lines"]:
		for region in line["regions"]:
			told = readout_over(browser, "table.regions tbody tr", index)
			found = re.fullmatch(r"(.*): starts at (\d+) ticks? = (\S+) s; lasts (\d+) ticks? = (\S+) s(; asked (\S+) ticks)?", told)
			if found is None or (found[1], found[2], found[4]) != (region["name"], region["start_ticks"], region["ticks"]):
				fault("region:", told, region)
			elif found[7] is not None and found[7] != region["asked_ticks"]:
				fault("asked:", told, region)
			index += 1


def check_pictures(browser, report):
	"""What pictures of lines tell of regions and levels, of each type that was drawn, is what the report has."""
	for line in report["lines"]:
		title = f'"{line["name"]}"'
		figure = browser.value(f"""Array.from(document.querySelectorAll("figure.of-line")).findIndex(figure =>
			figure.querySelector("svg > title").textContent.includes({json.dumps(title)}))""")
		if figure < 0:
			if line["used"] > 0:
				fault("no picture of", title)
			continue
		inside = f"document.querySelectorAll('figure.of-line')[{figure}].querySelectorAll"
		regions = browser.value(f"Array.from({inside}('.region')).map(box => ['region', 'tick', 'ticks', 'us'].map(key => box.dataset[key]))")
		wanted = [[region["name"], region["start_ticks"], region["ticks"]] for region in line["regions"]]
		if [region[:3] for region in regions] != wanted:
			fault("regions of", title, regions, wanted)
		if any(abs(float(shown[3]) - region["us"]) > 1e-6 for shown, region in zip(regions, line["regions"])):
			fault("microseconds of", title, regions)
		check_runs(browser, inside, title, line)


def check_runs(browser, inside, title, line):
	"""A pointer over each run of each trace, and the runs are the whole line."""
	traces = browser.value(f"Array.from({inside}('g.trace')).map(trace => [trace.dataset.trace, trace.querySelectorAll('.run').length])")
	for trace, (name, runs) in enumerate(traces):
		cells = ticks = 0
		for run in range(runs):
			told = readout_over(browser, "", f"{inside}('g.trace')[{trace}].querySelectorAll('.run')[{run}]")
			found = re.match(r"(\S+) (high|low), (not )?asserted: cells? (\d+)(?: to \d+)?; (\d+) cells?, (\d+) ticks?, (\S+) us", told)
			if found is None or found[1] != name or int(found[4]) != cells:
				fault("run:", title, name, run, told)
				continue
			cells, ticks = cells + int(found[5]), ticks + int(found[6])
		if (cells, ticks) != (line["cells"], int(line["ticks"])):
			fault("runs of", title, name, "are", cells, "cells,", ticks, "ticks")


def check_boxes(browser):
	"""The boxes above a picture put traces away and show them again."""
	state = """(() => { const figure = document.querySelector("figure.of-line"), box = figure.querySelector("input");
		%s return [figure.querySelectorAll("input").length === figure.querySelectorAll("g.trace").length,
		getComputedStyle(figure.querySelector("g.trace")).display !== "none"]; })()"""
	found = [browser.value(state % act) for act in ("", "box.click();", "box.click();")]
	if found != [[True, True], [True, False], [True, True]]:
		fault("boxes of traces:", found)


def check_limits(browser, report):
	shown = [item for item in report["limits"]["items"] if "low" in item]
	rows = browser.value("document.querySelectorAll('table.limits tbody tr').length")
	if rows != len(shown) or rows == 0:
		fault("limits:", rows, "rows,", len(shown), "items")
	grade = report["limits"]["grade"]
	for index in range(rows):
		told, item = readout_over(browser, "table.limits tbody tr", index), shown[index]
		found = re.match(r"(.*?)(?:, in (\S+))?: measured (\S+?)(?: to (\S+?))?(?:; |$)", told)
		if found is None or found.groups("") != (item["item"], item["unit"], str(item["low"]), str(item["high"]) if item["high"] != item["low"] else ""):
			fault("limit:", told, item)
		margin = re.search(r"; margin (\S+)$", told)
		if (margin[1] if margin else None) != item.get(grade, {}).get("margin"):
			fault("margin:", told, item.get(grade))


def tells(page, check, proofs):
	browser = Browser()
	try:
		browser.open(url_of(page))
		browser.size(1280, 900)
		if readout_over(browser, "h1", 0) != "":
			fault("the heading tells something")
		with open(check, encoding="utf-8") as file:
			report = json.load(file)
		check_regions(browser, report)
		check_pictures(browser, report)
		check_boxes(browser)
		with open(proofs, encoding="utf-8") as file:
			check_limits(browser, json.load(file)["proofs"])
	finally:
		browser.close()


def harmless(page, title):
	browser = Browser()
	try:
		browser.open(url_of(page))
		found = browser.value("[document.title, document.scripts.length, document.querySelectorAll('[onload],[onclick],[onmouseover],iframe,img,object').length]")
		if found != [title, 1, 0]:
			fault("title, scripts, others:", found)
		check_events(page, browser.events)
	finally:
		browser.close()


def looks(page, folder):
	browser = Browser()
	try:
		browser.open(url_of(page))
		for width in (390, 1280, 1920):
			for dark in (False, True):
				browser.size(width, 1000, dark=dark)
				height = browser.value("document.documentElement.scrollHeight")
				browser.picture(os.path.join(folder, f"{width}-{'dark' if dark else 'light'}.png"), (0, 0, width, height))
	finally:
		browser.close()


def main(task, *arguments):
	if task in ("quiet", "fits", "prints"):
		{"quiet": quiet, "fits": fits, "prints": prints}[task](arguments)
	else:
		{"tells": tells, "harmless": harmless, "looks": looks}[task](*arguments)
	for line in faults[:20]:
		print(line)
	sys.exit(bool(faults))


if __name__ == "__main__":
	main(*sys.argv[1:])
