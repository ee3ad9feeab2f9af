# Flips bits of images, one at a time, and lets the program prove them: a bit that the frame uses must be missed, and a
# counterexample shown, any other must not matter. In a large machine the counterexample must name the very byte; in one of few
# cells a wrong byte may look like another. Prints what went wrong and at last "PASSED FAILED".
#
#     python3 flip_bits.py PROGRAM GOOD PLANS WORK
#
# GOOD is tests/good, PLANS is plans, WORK an empty folder. Python's standard library only.
import json
import os
import random
import re
import subprocess
import sys

program, good, plans, work = sys.argv[1:]
passed = failed = 0

# What the frame uses: for each chip its bytes' addresses and the mask of the bits there. See the table at the head of each plan.
SMALL = [
    ('rounding', {'rom0': {address: 0x1F for address in range(6)}}),
    ('stretch-auto', {'rom0': {address: 0x1F for address in range(6)}}),
    ('direct', {'rom0': {address: 0x3F for address in range(5)}}),
    ('count-sync', {'rom0': {address: 0x03 for address in range(6)}}),
    # Row 6 clears the counter; its sync is never latched.
    ('count-async', {'rom0': {**{address: 0x03 for address in range(6)}, 6: 0x01}}),
    # States 2 and 4 are spare, but a flipped bit can make each its own successor, from which there is no way home.
    ('flicker', {'rom0': {**{address: 0x07 for address in (0, 1, 6, 7)}, 2: 0x02, 4: 0x04}}),
    # Two bytes an address, the low one first.
    ('wide-part', {'U1': {address: (0x03, 0x01)[address % 2] for address in range(8)}}),
    # An open pin is read as low (A4), A1 is tied low and A3 high.
    ('pins', {'U1': {address: 0x07 for address in (8, 9, 12, 13)}}),
    ('bank', {'U1': {address: 0x07 for address in range(8)}}),
    ('scrambled', {'U1': {address: 0x88 for address in range(4)}, 'U2': {address: 0x01 for address in range(4)}}),
]

# The same of two stages; there the counterexample must name the byte in small machines too, since lines and cells are numbered.
# Spare rows are used as far as a flipped bit can make each its own successor.
PICTURE, QUIET = (0, 1, 2), (8, 9)
NIGHT_TABLE = {address: 0x0F for address in range(3)}
TWO_STAGES = [
    ('two-tables', {'rom0': {**{address: 0x3F for address in PICTURE + QUIET}, 4: 0x04, 10: 0x02, 12: 0x04}, 'rom1': NIGHT_TABLE}),
    ('two-direct', {'rom0': {**{address: 0x3F for address in PICTURE + QUIET}, 4: 0x04, 10: 0x02, 12: 0x04}, 'rom1': NIGHT_TABLE}),
    # In the spare kinds 2 and 3, H 0 must step.
    ('two-counters', {'rom0': {**{address: 0x0F for address in PICTURE + QUIET}, 16: 0x01, 24: 0x01}, 'rom1': NIGHT_TABLE}),
    # Rows 3 and 11, and V 3, are passed through and clear.
    ('two-async', {'rom0': {**{address: 0x0F for address in PICTURE + (8, 9, 10)}, 3: 0x02, 11: 0x02},
                   'rom1': {**{address: 0x07 for address in range(3)}, 3: 0x02}}),
    # Two bytes an address in U1, where A2 is tied high and A4 open; A1 of U2 is tied low, A0 of U3 open.
    ('two-wires', {'U1': {**{2 * word: 0x09 for word in (4, 5, 6, 12, 13)}, **{2 * word + 1: 0x91 for word in (4, 5, 6, 12, 13)}, 14: 0x08},
                   'U2': {address: 0x45 for address in (0, 1, 4)}, 'U3': {address: 0x80 for address in (0, 2, 4)}}),
    ('two-held', {'rom0': {**{address: 0x3F for address in (5, 7, 1, 13, 15)}, 4: 0x01, 9: 0x04, 12: 0x01}, 'rom1': NIGHT_TABLE}),
]
# Of a 16-bit part, addresses count words.
BYTES_AT_ADDRESS = {('two-wires', 'U1'): 2}


def report(good_so_far, message):
    global passed, failed
    if good_so_far:
        passed += 1
    else:
        failed += 1
        print('FAILED: ' + message)


def run(*arguments):
    result = subprocess.run([program, *arguments], stdin=subprocess.DEVNULL, capture_output=True, timeout=60)
    return result.returncode, result.stdout


def counterexamples(output):
    """Places (chip, address) that the failed proofs show; (None, None) for one that shows none."""
    failed_proofs = [proof for proof in json.loads(output)['proofs'].values() if proof['verdict'] == 'fail']
    examples = [proof.get('counterexample', {}) for proof in failed_proofs]
    return [(example.get('chip'), example.get('address')) for example in examples]


class Machine:
    """A plan's images in a folder of their own."""

    def __init__(self, plan):
        self.plan = plan
        self.name = os.path.basename(plan)[:-len('.yaml')]
        self.folder = os.path.join(work, self.name)
        status, _ = run('build', plan, '-o', self.folder, '--format', 'bin', '--listing')
        report(status == 0, '%s: build, exit status %d' % (self.name, status))

    def path(self, label):
        return os.path.join(self.folder, '%s.%s.bin' % (self.name, label))

    def flip(self, label, address, bit):
        with open(self.path(label), 'r+b') as image:
            image.seek(address)
            byte = image.read(1)[0]
            image.seek(address)
            image.write(bytes([byte ^ 1 << bit]))

    def judge(self, label, address, bit, used, named=False):
        self.flip(label, address, bit)
        status, output = run('prove', '--json', self.plan, self.folder)
        self.flip(label, address, bit)
        what = '%s: bit %d of byte 0x%X of %s flipped, which is %s' % (
            self.name, bit, address, label, 'used' if used else 'not used')
        report(status == (1 if used else 0), '%s: exit status %d' % (what, status))
        if used and status == 1:
            places = counterexamples(output)
            place = (label, address // BYTES_AT_ADDRESS.get((self.name, label), 1))
            report(place in places if named else len(places) > 0, what + ': shown instead: %s' % places)

    def frame_states(self):
        states = []
        with open(os.path.join(self.folder, self.name + '.lst')) as listing:
            for row in listing:
                if row.startswith('"'):
                    states.append(int(row.rsplit('" ', 1)[1].split()[0], 16))
        return states


    def stage_rows(self):
        """Of the line stage and the frame stage: the addresses of their rows, the same for all chips of a stage."""
        stages = []
        with open(os.path.join(self.folder, self.name + '.lst')) as listing:
            for row in listing:
                if row.endswith(' stage:\n'):
                    stages.append({})
                elif row.startswith('"'):
                    stages[-1][int(re.search(r'  ([0-9A-F]+):', row)[1], 16)] = True
        return [list(rows) for rows in stages]

    def rows_of_cell(self, cell):
        """The addresses of the line stage's rows of a cell, of each line type."""
        rows = set()
        with open(os.path.join(self.folder, self.name + '.lst')) as listing:
            for row in listing:
                place = re.match(r'"[^"]*" \d+ (\d+) "[^"]*" .*?  ([0-9A-F]+):', row)
                if place and int(place[1]) == cell:
                    rows.add(int(place[2], 16))
        return sorted(rows)


def every_bit(name, used, named=False):
    machine = Machine(os.path.join(good, name + '.yaml'))
    for label, masks in used.items():
        for address in range(os.path.getsize(machine.path(label))):
            for bit in range(8):
                machine.judge(label, address, bit, bool(masks.get(address, 0) >> bit & 1), named)


def sample(name, word_bits, open_bit, count):
    """Bits of rows of the frame; then unwired data pins, and the half that an open address pin selects when it is high."""
    machine = Machine(os.path.join(plans, name + '.yaml'))
    states = machine.frame_states()
    chance = random.Random(1868)
    for _ in range(count):
        bit = chance.randrange(word_bits)
        machine.judge('rom%d' % (bit // 8), chance.choice(states), bit % 8, True, named=True)
    for bit in range(word_bits, (word_bits + 7) // 8 * 8):
        machine.judge('rom%d' % (bit // 8), chance.choice(states), bit % 8, False)
    for _ in range(8):
        bit = chance.randrange(word_bits)
        machine.judge('rom%d' % (bit // 8), chance.choice(states) | 1 << open_bit, bit % 8, False)


def sample_stages(name, word_bits, next_bits, last_cell, count):
    """Bits of rows of both stages, straight wired; and all bits of next H in the rows before a line's last: a spare state has the same row
    as the last cell's, so that one bit away from that no state may be spare."""
    machine = Machine(os.path.join(plans, name + '.yaml'))
    chance = random.Random(1898)
    first_chip = 0
    for stage, rows in enumerate(machine.stage_rows()):
        for _ in range(count):
            bit, row = chance.randrange(word_bits[stage]), chance.choice(rows)
            machine.judge('rom%d' % (first_chip + bit // 8), row, bit % 8, True, named=True)
        first_chip += (word_bits[stage] + 7) // 8
    before_last = machine.rows_of_cell(last_cell - 1)
    report(len(before_last) > 1, name + ': rows before the last of each type')
    for row in before_last:
        for bit in range(next_bits):
            machine.judge('rom0', row, bit, True)


for case in SMALL:
    every_bit(*case)
for case in TWO_STAGES:
    every_bit(*case, named=True)
# Sixteen bits of next state and five signals; a 28C010 has A16 left over.
sample('tide-board-60', 21, 16, 200)
# Seven bits of H, step, three signals; ten bits of V, two of kind, a signal.
sample_stages('mooring-board', (11, 13), 7, 99, 100)
print(passed, failed)
