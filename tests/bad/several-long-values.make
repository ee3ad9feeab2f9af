# Values of 800 characters, none of which may leave a message without what is wrong with them.
long=$(head -c 800 /dev/zero | tr '\0' 'x')
zeros=$(head -c 800 /dev/zero | tr '\0' '0')
cat <<END
scanlatch: $long
name: X$long
clock:
  master: $long
  accuracy: ${zeros}1000000 ppm
  dot: 0.$zeros ticks
  cell: 1.${zeros}5 ticks
  subcarrier: $long
  phase: $long
signals:
  X$long: { role: $long, active: $long, lead: 0.${zeros}5 cells, from: $long }
  X${long}x: { role: stretch, active: low }
  X${long}y: { role: stretch, active: low }
lines:
  $long:
    regions:
      - { region: $long, cells: $long }
      - { region: quay, cells: ${zeros}0 }
      - { region: pier, fill: $long, $long: 1 }
      - { region: sea, time: 1.$zeros m, assert: $long }
      - { region: ebb, time: -1.$zeros us, assert: [$long] }
frame:
  - { repeat: $long, line: x$long }
machine: { form: loop, state: 0.${zeros}5 bits, advance: $long, fields: { X$long: 1 } }
parts:
  $long: { address pins: $long, data pins: $long, access: [ 0.$zeros ns ] }
chips:
  - { label: $long!, part: X$long, speed: 100 ns, address: [], data: [] }
timing: { latch: $long, decoder delay: $long, share: $long }
END
