#!/bin/bash
# tools/get-packages on a machine made of shims: what it installs, how, what it says, and when it refuses.
set -u
. tests/report.sh

folder=$(mktemp -d) || exit 1
trap 'rm -rf "$folder"' EXIT
tool=$PWD/tools/get-packages

# A PATH with nothing but what get-packages needs, so that apt-get and sudo are there only when a case puts them there.
for name in sh env grep printf; do
	mkdir -p "$folder/bin"
	ln -s "$(command -v "$name" || echo "/usr/bin/$name")" "$folder/bin/$name"
done

shim() {
	printf '#!/bin/sh\n%s\n' "$2" >"$folder/bin/$1"
	chmod +x "$folder/bin/$1"
}

# A machine of user $1 on which the packages that follow are missing; apt-get notes how it was called.
machine() {
	local user=$1
	shift
	rm -f "$folder/calls" "$folder/bin/sudo"
	shim id "echo $user"
	shim dpkg-query "for package; do :; done
case ' $* ' in *\" \$package \"*) echo \"no packages found matching \$package\" >&2; exit 1 ;; esac
echo installed"
	shim apt-get "echo \"apt-get \$* (\$DEBIAN_FRONTEND)\" >>'$folder/calls'"
}

# Runs the tool there; its standard output, standard error, calls and status become one text.
outcome() {
	local status
	PATH=$folder/bin "$tool" "$@" >"$folder/out" 2>"$folder/err"
	status=$?
	[ ! -f "$folder/calls" ] || cat "$folder/calls"
	sed 's/^/out: /' "$folder/out"
	sed 's/^/err: /' "$folder/err"
	echo "status $status"
}

error='err: tools/get-packages: error:'

machine 0
same 'nothing is missing: silent, apt-get is not called' 'status 0' "$(outcome build test bench ci)"

machine 0 libyaml-dev jansson
same 'root installs what is missing and nothing else' \
	'apt-get update -q (noninteractive)
apt-get install -q -y --no-install-recommends libyaml-dev (noninteractive)
out: tools/get-packages: installing libyaml-dev
status 0' "$(outcome build)"

machine 0 gcc libcmocka-dev python3-intelhex clang
same 'several sets go into one call' \
	'apt-get update -q (noninteractive)
apt-get install -q -y --no-install-recommends gcc libcmocka-dev python3-intelhex clang (noninteractive)
out: tools/get-packages: installing gcc libcmocka-dev python3-intelhex clang
status 0' "$(outcome build test ci)"

machine 0 libcmocka-dev
same 'a set that was not named is not asked for' 'status 0' "$(outcome build)"

machine 1000 zlib1g-dev
shim sudo "echo \"sudo \$*\" >>'$folder/calls'; exec \"\$@\""
same 'others install through sudo' \
	'sudo env DEBIAN_FRONTEND=noninteractive apt-get update -q
apt-get update -q (noninteractive)
sudo env DEBIAN_FRONTEND=noninteractive apt-get install -q -y --no-install-recommends zlib1g-dev
apt-get install -q -y --no-install-recommends zlib1g-dev (noninteractive)
out: tools/get-packages: installing zlib1g-dev
status 0' "$(outcome build)"

machine 1000 zlib1g-dev
same 'without sudo others are told' \
	"$error missing Debian packages: zlib1g-dev (installing them takes root or sudo)
status 1" "$(outcome build)"

machine 0 libjansson-dev pkg-config
same 'NO_INSTALL=1 names the packages and stops' \
	"$error missing Debian packages: libjansson-dev pkg-config (not installed, for NO_INSTALL=1)
status 1" "$(NO_INSTALL=1 outcome build)"

machine 0
same 'NO_INSTALL=1 is content when nothing is missing' 'status 0' "$(NO_INSTALL=1 outcome build)"

machine 0 gcc
rm "$folder/bin/apt-get"
same 'without apt-get the packages are named' \
	"$error missing Debian packages: gcc (there is no apt-get here to install them; where their like is installed by\
 other means, make with GET_PACKAGES=:)
status 1" "$(outcome build)"

machine 0 gcc
rm "$folder/bin/dpkg-query" "$folder/bin/apt-get"
same 'without dpkg-query every package counts as missing' \
	"$error missing Debian packages: binutils (there is no apt-get here to install them; where their like is installed by\
 other means, make with GET_PACKAGES=:)
status 1" "$(outcome bench)"

machine 0
shim dpkg-query 'echo config-files'
same 'a package that left only its configuration is missing' \
	"$error missing Debian packages: binutils (not installed, for NO_INSTALL=1)
status 1" "$(NO_INSTALL=1 outcome bench)"

machine 0 gcc
# shellcheck disable=SC2016 # the shim expands it
shim apt-get 'case $1 in install) exit 100 ;; esac'
same 'a failed installation fails' \
	"out: tools/get-packages: installing gcc
$error cannot install: gcc
status 1" "$(outcome build)"

machine 0 gcc
shim apt-get "exit 100"
same 'a failed update fails' \
	"out: tools/get-packages: installing gcc
$error apt-get update failed
status 1" "$(outcome build)"

machine 0
same 'an unknown set fails' "$error unknown set 'tea' (build, test, bench, ci)
status 1" "$(outcome build tea)"
same 'no set fails' "$error name one set or more: build, test, bench, ci
status 1" "$(outcome)"

finish
