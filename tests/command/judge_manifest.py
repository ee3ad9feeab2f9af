# Judges a manifest: its form, and that its figures are those of the files. Fails with what is wrong.
#
#     python3 judge_manifest.py PLAN FOLDER [PROOFS]
#
# PROOFS is what `prove --json` printed for the same images. Python's standard library only.
import fractions
import json
import os
import re
import sys
import zlib


def check(condition, *what):
    if not condition:
        sys.exit(' '.join(str(part) for part in what))


def same(what, found, wanted):
    check(found == wanted, what + ': found', found, 'wanted', wanted)


def read(*path):
    with open(os.path.join(*path), 'rb') as file:
        return file.read()


def decode_hex(text):
    """The bytes of an Intel HEX file that covers its chip from 0 on."""
    base, image = 0, {}
    for line in text.decode('ascii').splitlines():
        record = bytes.fromhex(line[1:])
        check(line[0] == ':' and len(record) == record[0] + 5 and sum(record) % 256 == 0, 'bad record', line)
        data, offset = record[4:-1], record[1] << 8 | record[2]
        if record[3] == 4:
            base = (data[0] << 8 | data[1]) << 16
        elif record[3] == 0:
            image.update({base + offset + index: byte for index, byte in enumerate(data)})
    same('addresses', sorted(image), list(range(len(image))))
    return bytes(image[address] for address in range(len(image)))


def judge_chip(chip, folder):
    images = []
    for name in chip['files']:
        check(name.endswith(('.bin', '.hex')), 'file', name)
        content = read(folder, name)
        images.append(content if name.endswith('.bin') else decode_hex(content))
    check(images, 'no files')
    for image in images:
        same(chip['label'] + ' bytes', chip['bytes'], len(image))
        same(chip['label'] + ' crc32', chip['crc32'], '%08x' % zlib.crc32(image))
        same(chip['label'] + ' sum16', chip['sum16'], sum(image) % 65536)


def judge(plan, folder, proofs):
    name = os.path.basename(plan)[:-len('.yaml')]
    manifest = json.loads(read(folder, name + '.manifest.json'))
    of_set = read(plan).count(b'scanlatch-set:') == 1
    same('keys', list(manifest), ['format', 'name', 'plan', 'chips', 'start'] + (['banks', 'jumpers'] if of_set else ['frame', 'proofs']))
    same('format', manifest['format'], 1)
    same('name', manifest['name'], name)
    same('plan', manifest['plan'], {'file': os.path.basename(plan), 'crc32': '%08x' % zlib.crc32(read(plan))})
    for chip in manifest['chips']:
        judge_chip(chip, folder)
    listed = [file for chip in manifest['chips'] for file in chip['files']] + [name + '.manifest.json']
    same('files', sorted(listed), sorted(os.listdir(folder)))
    if of_set:
        judge_banks(plan, manifest, json.loads(read(proofs)) if proofs else None)
        return
    judge_frame(plan, manifest['frame'])
    if proofs:
        same('proofs', manifest['proofs'], json.loads(read(proofs))['proofs'])


def judge_frame(plan, frame):
    master = re.search(rb'master: *([0-9./]+) *([kM]?)Hz', read(plan))
    hertz = fractions.Fraction(master[1].decode()) * {b'': 1, b'k': 1000, b'M': 1000000}[master[2]]
    same('rate', fractions.Fraction(frame['rate']['fraction']), hertz / int(frame['ticks']))
    check(abs(frame['rate']['decimal'] - float(hertz / int(frame['ticks']))) < 1e-6, 'decimal rate', frame['rate'])


def judge_banks(path, manifest, proved):
    """Every bank is some plan's, whose file is what the manifest says."""
    same('banks', sorted(bank for entry in manifest['banks'] for bank in entry['banks']), sorted({start['bank'] for start in manifest['start']}))
    for index, entry in enumerate(manifest['banks']):
        plan = os.path.join(os.path.dirname(path), entry['plan']['file'])
        same('plan of a bank', entry['plan']['crc32'], '%08x' % zlib.crc32(read(plan)))
        judge_frame(plan, entry['frame'])
        if proved:
            same('proofs of a bank', entry['proofs'], proved['banks'][index]['proofs'])
    if proved:
        same('jumpers', manifest['jumpers'], proved['jumpers'])


judge(sys.argv[1], sys.argv[2], sys.argv[3] if len(sys.argv) > 3 else None)
