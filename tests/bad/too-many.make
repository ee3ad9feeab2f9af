# One signal more than there may be.
echo 'scanlatch: 1'
echo 'name: jetty'
echo 'clock: { master: 1 MHz, dot: 1 tick, cell: 1 dot }'
echo 'signals:'
for number in 0 1 2 3 4 5 6 7 8 9 10 11 12; do
	for letter in a b c d e; do
		echo "  $letter$number: { role: plain, active: high }"
	done
done
cat <<'END'
lines: { only: { regions: [ { region: all, cells: 4 } ] } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 2 bits }
chips: { part: 28C16, speed: 150 ns }
END
