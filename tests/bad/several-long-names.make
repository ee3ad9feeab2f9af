# Long names and wires of what there is not, in a plan whose machine and signals are well-formed.
long=$(head -c 800 /dev/zero | tr '\0' 'x')
zeros=$(head -c 800 /dev/zero | tr '\0' '0')
blanks=$(head -c 800 /dev/zero | tr '\0' ' ')
cat <<END
scanlatch: 1
name: jetty
clock: { master: 1 MHz, cell: 1 tick }
signals:
  tide: { role: plain, active: high }
  lamp: { role: plain, active: high, from: { field: at, codes: [1] } }
lines:
  only:
    regions:
      - { region: quay, cells: 1, hold: { $long: 1, at: $long } }
      - { region: pier, cells: 1, hold: { at: cell + $long } }
      - { region: sea, cells: 1, assert: [$long], hold: { at: "cell $blanks +" } }
  other: { like: $long }
  third: { like: only, change: [ { region: $long, cells: 2 } ] }
frame:
  - { repeat: 1, line: only }
machine: { form: loop, state: 2 bits, fields: { at: 1..0 } }
chips:
  - label: U1
    part: 28C16
    address: [ state.0, state.1, $long, kind.${zeros}1, state.${zeros}7, -, -, -, -, -, -]
    data: [ next.0, next.1, $long, kind.${zeros}1, next.${zeros}7, tide, -, -]
sweep:
  - { bits: $long, within: 1 s }
  - { bits: at.$long, within: 0.$zeros s }
END
