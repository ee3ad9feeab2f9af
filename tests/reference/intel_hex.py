"""Intel HEX to binary and back by the Python library intelhex.

    intel_hex.py decode HEX BINARY BYTES     a binary of so many bytes from address 0 on, FF where the file has none
    intel_hex.py encode BINARY HEX
"""

import sys

from intelhex import IntelHex


def decode(source, target, size):
	with open(target, "wb") as file:
		file.write(IntelHex(source).tobinstr(start=0, size=int(size)))


def encode(source, target):
	image = IntelHex()
	image.loadbin(source)
	image.write_hex_file(target)


{"decode": decode, "encode": encode}[sys.argv[1]](*sys.argv[2:])
