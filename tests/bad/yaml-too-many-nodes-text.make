# Aliases of a long text: each would have the plan read it again.
echo 'scanlatch: 1'
echo 'name: jetty'
printf 'note: &long '
head -c 64000 /dev/zero | tr '\0' 'x'
printf '\nlist: ['
head -c 600 /dev/zero | sed 's/\x00/*long, /g' | fold -w 70
echo ']'
