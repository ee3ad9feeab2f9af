# More cells than states under holds of many fields with long names.
long=$(head -c 90 /dev/zero | tr '\0' 'x')
fields='' hold=''
for bit in 0 1 2 3 4 5 6 7 8 9; do
	fields="$fields $long$bit: $bit,"
	hold="$hold $long$bit: 0,"
done
cat <<END
scanlatch: 1
name: jetty
clock: { master: 1 MHz, cell: 1 tick }
signals: { tide: { role: plain, active: high } }
lines:
  only: { regions: [ { region: mole, cells: 1, assert: [tide] }, { region: quay, cells: 3, hold: { $hold } } ] }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 11 bits, fields: { $fields } }
chips: { part: 28C16, speed: 150 ns }
END
