#!/bin/bash
# Plain make and make install, from nothing, into a folder of their own: what is there afterwards, that nothing else is,
# that a client can be built against it, and that no package was asked for.
set -u
. tests/report.sh

folder=$(mktemp -d) || exit 1
trap 'rm -rf "$folder"' EXIT

# Would be found before the real ones, and leave a trace.
mkdir "$folder/bin"
for name in apt-get sudo; do
	printf '#!/bin/sh\ntouch "%s/asked"\nexit 1\n' "$folder" >"$folder/bin/$name"
	chmod +x "$folder/bin/$name"
done

build() {
	PATH=$folder/bin:$PATH make -j2 V=1 BUILD="$folder/build" CFLAGS=-O0 "$@" >"$folder/log" 2>&1 || {
		cat "$folder/log"
		return 1
	}
}

holds 'plain make builds' build
holds 'the program is there' test -x "$folder/build/scanlatch"
holds 'the library is there' test -f "$folder/build/libscanlatch.a"
holds 'a second make compiles nothing' build
same 'a second make is silent' '' "$(grep -v "^make.*Nothing to be done for 'all'" "$folder/log")"
holds 'make install installs' build install DESTDIR="$folder/system" PREFIX=/opt/bench
holds 'no package was asked for' test ! -e "$folder/asked"

root=$folder/system/opt/bench
same 'what is installed' "./opt/bench/bin/scanlatch
./opt/bench/include/scanlatch/scanlatch.h
./opt/bench/lib/libscanlatch.a
./opt/bench/lib/pkgconfig/scanlatch.pc
./opt/bench/share/bash-completion/completions/scanlatch
$(for file in LICENSE README.md plans/README.md plans/*.yaml; do echo "./opt/bench/share/doc/scanlatch/$file"; done)
./opt/bench/share/man/man1/scanlatch.1" "$(cd "$folder/system" && find . -type f | LC_ALL=C sort)"

holds 'the installed program runs' "$root/bin/scanlatch" --version
same 'the installed completion loads' 'complete -F _scanlatch scanlatch' \
	"$(bash -c '. "$0" && complete -p scanlatch' "$root/share/bash-completion/completions/scanlatch")"

# pkg-config puts the root before the folders that the file names.
flags() {
	PKG_CONFIG_SYSROOT_DIR=$folder/system PKG_CONFIG_PATH=$root/lib/pkgconfig pkg-config "$@" scanlatch
}

cat >"$folder/client.c" <<'END'
#include <scanlatch/scanlatch.h>
#include <stdio.h>

int main(void)
{
	puts(scanlatch_version());
	return 0;
}
END
# shellcheck disable=SC2046 # pkg-config prints several words
holds 'a client compiles against header and library' \
	"${CC:-cc}" -std=c11 -Wall -Wextra -Wpedantic -Werror -o "$folder/client" "$folder/client.c" $(flags --cflags --libs)
version=$("$folder/client")
same 'pkg-config and the library have the same version' "$version" "$(flags --modversion)"
same 'the program has that version too' "scanlatch $version" "$("$root/bin/scanlatch" --version | head -n 1)"

# Other flags, another build: what was compiled with the old ones must not stay.
holds 'other flags compile again' build CFLAGS=-O1
same 'and everything' "$(find src -name '*.c' | wc -l)" "$(grep -c -- '-O1 .*-c -o .* src/' "$folder/log")"
holds 'clean removes the folder' build clean
holds 'all of it' test ! -e "$folder/build"

finish
