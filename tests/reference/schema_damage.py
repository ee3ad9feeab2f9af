"""Reports of what fails: images with flipped bits, proved.

    schema_damage.py SEED IMAGES PLAN OUT     IMAGES: as build wrote them; OUT: a new folder, for the reports and the damaged images
"""
import pathlib
import random
import shutil
import subprocess
import sys

import schema_validators


def flip(chance, folder):
    """Flips one bit in each chip, most often near the start, where small machines have their rows."""
    for image in sorted(folder.glob("*.bin")):
        content = bytearray(image.read_bytes())
        content[chance.randrange(chance.choice([4, 64, len(content)])) % len(content)] ^= 1 << chance.randrange(8)
        image.write_bytes(content)
    for image in folder.glob("*.hex"):
        image.unlink()


def main(seed, images, plan, out):
    chance = random.Random(f"{seed} {plan}")
    for turn in range(6):
        folder = out / f"images-{turn}"
        shutil.copytree(images, folder)
        flip(chance, folder)
        run = subprocess.run([schema_validators.PROGRAM, "prove", "--json", plan, str(folder)], stdout=subprocess.PIPE,
                             stderr=subprocess.DEVNULL, check=False)
        (out / f"{turn}.prove").write_bytes(run.stdout)
        shutil.rmtree(folder)


main(int(sys.argv[1]), pathlib.Path(sys.argv[2]), sys.argv[3], pathlib.Path(sys.argv[4]))
