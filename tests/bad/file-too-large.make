# Two mebibytes: a plan has at most one.
printf 'scanlatch: 1\n'
head -c 2097152 /dev/zero | tr '\0' '#'
