"""Runs a command under faults.so, sends it a signal while it waits in its first flush, and lets it go on.

    faults_signal.py SIGNAL COMMAND ...

Fails unless that signal is what ends the command, and not before it has gone on."""
import os
import signal
import subprocess
import sys
import time

number = getattr(signal, "SIG" + sys.argv[1])
marker = os.path.abspath("waiting")
environment = dict(os.environ, LD_PRELOAD="./faults.so", FAULTS_WAIT=marker)
process = subprocess.Popen(sys.argv[2:], env=environment, stdout=subprocess.DEVNULL)
deadline = time.monotonic() + 5
while not os.path.exists(marker) and time.monotonic() < deadline:
    time.sleep(0.005)
if not os.path.exists(marker):
    sys.exit("it does not flush")
process.send_signal(number)
time.sleep(0.05)
if process.poll() is not None:
    sys.exit(f"it ended at once: {process.returncode}")
while process.poll() is None and time.monotonic() < deadline:
    if os.path.exists(marker):
        os.remove(marker)
    time.sleep(0.005)
if process.returncode != -number:
    sys.exit(f"it ended with {process.returncode}")
