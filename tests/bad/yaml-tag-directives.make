# Forty thousand directives, the first of them a second time.
number=0
while [ $number -lt 40000 ]; do
	echo "%TAG !$number! jetty"
	number=$((number + 1))
done
echo "%TAG !0! quay"
echo '---'
echo 'scanlatch: 1'
