"""A headless Chromium that is spoken to over a pipe, by the DevTools protocol: messages are JSON, each ended by a NUL byte
(--remote-debugging-pipe: it reads descriptor 3 and writes descriptor 4)."""

import base64
import json
import os
import select
import shutil
import subprocess
import tempfile
import time

# No name is looked up and no proxy asked: whatever would leave the machine fails at once.
FLAGS = ["--headless", "--no-sandbox", "--disable-gpu", "--disable-dev-shm-usage", "--hide-scrollbars", "--no-first-run", "--no-default-browser-check",
	"--disable-extensions", "--disable-background-networking", "--disable-component-update", "--disable-sync", "--disable-default-apps",
	"--host-resolver-rules=MAP * ~NOTFOUND", "--remote-debugging-pipe", "--use-mock-keychain", "--password-store=basic"]


class Browser:
	def __init__(self, log=None):
		self.profile = tempfile.mkdtemp(prefix="browser-")
		self.count = 0
		self.events = []
		self.buffer = b""
		self.session = None
		here_read, there_write = os.pipe()
		there_read, here_write = os.pipe()
		flags = FLAGS + [f"--user-data-dir={self.profile}"] + ([f"--log-net-log={log}", "--net-log-capture-mode=Everything"] if log else [])
		shell = 'read="$1"; write="$2"; shift 2; exec "$@" 3<&"$read" 4>&"$write"'
		# The shell moves the descriptors to their numbers; those that are passed must not be 3 or 4 themselves.
		passed = [os.dup2(there_read, 20), os.dup2(there_write, 21)]
		shell = 'exec "$@" 3<&20 4>&21 20<&- 21>&-'
		self.process = subprocess.Popen(["bash", "-c", shell, "browser", "chromium"] + flags + ["about:blank"], pass_fds=passed,
			stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
		for descriptor in passed + [there_read, there_write]:
			os.close(descriptor)
		self.read, self.write = here_read, here_write
		target = next(entry for entry in self.call("Target.getTargets")["targetInfos"] if entry["type"] == "page")
		self.session = self.call("Target.attachToTarget", targetId=target["targetId"], flatten=True)["sessionId"]
		for domain in ("Page", "Runtime", "Log", "Network", "DOM"):
			self.call(domain + ".enable")

	def close(self):
		self.session = None
		try:
			self.call("Browser.close")
			self.process.wait(20)
		except (RuntimeError, OSError, subprocess.TimeoutExpired):
			self.process.kill()
			self.process.wait()
		os.close(self.read)
		os.close(self.write)
		shutil.rmtree(self.profile, ignore_errors=True)

	def receive(self, seconds):
		"""The next message, or None when there is none for so long."""
		end = time.monotonic() + seconds
		while b"\0" not in self.buffer:
			ready, _, _ = select.select([self.read], [], [], max(0, end - time.monotonic()))
			if not ready:
				return None
			data = os.read(self.read, 1 << 16)
			if not data:
				raise RuntimeError("the browser is gone")
			self.buffer += data
		message, self.buffer = self.buffer.split(b"\0", 1)
		return json.loads(message)

	def call(self, method, **parameters):
		self.count += 1
		message = {"id": self.count, "method": method, "params": parameters}
		if self.session is not None:
			message["sessionId"] = self.session
		data = json.dumps(message).encode() + b"\0"
		while data:
			data = data[os.write(self.write, data):]
		while True:
			answer = self.receive(120)
			if answer is None:
				raise RuntimeError(f"{method}: no answer")
			if answer.get("id") == message["id"]:
				if "error" in answer:
					raise RuntimeError(f"{method}: {answer['error']}")
				return answer["result"]
			if "method" in answer:
				self.events.append(answer)

	def wait_for(self, method, seconds=60):
		end = time.monotonic() + seconds
		while not any(event["method"] == method for event in self.events):
			event = self.receive(end - time.monotonic())
			if event is None:
				raise RuntimeError(f"{method} never came")
			if "method" in event:
				self.events.append(event)

	def settle(self, seconds=0.3):
		"""Takes in what still comes, until nothing does for so long."""
		while (event := self.receive(seconds)) is not None:
			if "method" in event:
				self.events.append(event)

	def open(self, url):
		self.events.clear()
		self.call("Page.navigate", url=url)
		self.wait_for("Page.loadEventFired")
		self.settle()

	def value(self, expression):
		result = self.call("Runtime.evaluate", expression=expression, returnByValue=True, awaitPromise=True)
		if "exceptionDetails" in result:
			raise RuntimeError(f"{expression}: {result['exceptionDetails']}")
		return result["result"].get("value")

	def size(self, width, height, media="", dark=False):
		self.call("Emulation.setDeviceMetricsOverride", width=width, height=height, deviceScaleFactor=1, mobile=False)
		self.call("Emulation.setEmulatedMedia", media=media, features=[{"name": "prefers-color-scheme", "value": "dark" if dark else "light"}])

	def picture(self, path, clip=None):
		parameters = {} if clip is None else {"clip": dict(zip(("x", "y", "width", "height", "scale"), clip + (1,))), "captureBeyondViewport": True}
		with open(path, "wb") as file:
			file.write(base64.b64decode(self.call("Page.captureScreenshot", format="png", **parameters)["data"]))

	def pdf(self, path, width, height):
		"""Prints on paper of so many inches, with the margins that the page asks for."""
		with open(path, "wb") as file:
			file.write(base64.b64decode(self.call("Page.printToPDF", paperWidth=width, paperHeight=height, printBackground=False,
				preferCSSPageSize=False, marginTop=0.4, marginBottom=0.4, marginLeft=0.4, marginRight=0.4)["data"]))

	def hover(self, x, y):
		self.call("Input.dispatchMouseEvent", type="mouseMoved", x=x, y=y)
