# A list of more items than a plan may have nodes.
echo 'scanlatch: 1'
echo 'list: ['
head -c 200200 /dev/zero | tr '\0' '1' | sed 's/11/1,/g' | fold -w 100
echo ']'
