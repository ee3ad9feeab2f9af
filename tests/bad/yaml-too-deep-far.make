# Nesting far beyond the limit must be found without recursion.
head -c 200000 /dev/zero | tr '\0' '['
