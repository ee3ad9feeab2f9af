# One byte more than a plan may have.
printf 'scanlatch: 1\n'
head -c 1048564 /dev/zero | tr '\0' '#'
