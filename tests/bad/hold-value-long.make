# A long expression whose value does not fit.
blanks=$(head -c 800 /dev/zero | tr '\0' ' ')
cat <<END
scanlatch: 1
name: jetty
clock: { master: 1 MHz, cell: 1 tick }
signals: { tide: { role: plain, active: high } }
lines: { only: { regions: [ { region: quay, cells: 3, hold: { at: "cell $blanks * 2" } } ] } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 2 bits, fields: { at: 1..0 } }
chips: { part: 28C16, speed: 150 ns }
END
