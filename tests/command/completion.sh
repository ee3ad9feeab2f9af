#!/bin/bash
# What bash completion offers, and that program, completion and manual page know the same commands and options.
set -u
. tests/report.sh
. src/command/scanlatch.bash-completion

# Only a running completion may call the real one.
compopt() { :; }

# offered WORD …: what is offered for the last word, one a line, sorted.
offered() {
	COMP_WORDS=(scanlatch "$@")
	COMP_CWORD=$#
	_scanlatch
	printf '%s\n' "${COMPREPLY[@]}" | sort
}

root=$PWD
folder=$(mktemp -d) || exit 1
trap 'rm -rf "$folder"' EXIT
cd "$folder" || exit 1
touch tide.yaml tide.yml tide.txt tide.rom0.bin tide.rom0.hex old.svg 'two words.yaml'
mkdir images

same 'commands' $'build\ncheck\ndiff\ndraw\nfit\nlift\nlist\nprove\nschema' "$(offered '')"
same 'a command begun' 'prove' "$(offered pr)"
same 'plans and folders' $'images\ntide.yaml\ntide.yml\ntwo words.yaml' "$(offered check '')"
same 'images too, to be proved' $'images\ntide.rom0.bin\ntide.rom0.hex\ntide.yaml\ntide.yml\ntwo words.yaml' \
	"$(offered prove tide.yaml '')"
same 'a blank in a name' 'two words.yaml' "$(offered check tw)"
same 'folders to write to' 'images' "$(offered build tide.yaml -o '')"
same 'the same for the long option' 'images' "$(offered build tide.yaml --output '')"
same 'folders of older images' 'images' "$(offered build tide.yaml --near '')"
same 'a plan to write' $'images\ntide.yaml\ntide.yml\ntwo words.yaml' "$(offered lift tide.yaml images -o '')"
same 'images to lift a plan out of' $'images\ntide.rom0.bin\ntide.rom0.hex\ntide.yaml\ntide.yml\ntwo words.yaml' \
	"$(offered lift tide.yaml '')"
same 'formats' $'bin\nbin,hex\nhex' "$(offered build --format '')"
same 'record lengths' $'16\n32' "$(offered build --record '')"
same 'colours' $'always\nauto\nnever' "$(offered check --color '')"
same 'standards to fit' $'composite-525\ncomposite-625' "$(offered fit --standard compos)"
same 'grades' $'monitor\nstudio' "$(offered fit --grade '')"
same 'a file to write' $'images\ntide.yaml\ntide.yml\ntwo words.yaml' "$(offered fit --write 1 '')"
same 'catalogues' $'crystals\nparts\nstandards' "$(offered list '')"
same 'schemas' "$("$SCANLATCH" schema '?' 2>&1 | sed -n 's/.*there are //p' | tr -d ' ' | tr , '\n' | sort)" "$(offered schema '')"
same 'what to draw' $'frame\nline\nphase\ntable' "$(offered draw '')"
same 'plans to draw' $'images\ntide.yaml\ntide.yml\ntwo words.yaml' "$(offered draw line '')"
same 'a file to draw into' $'images\nold.svg\ntide.txt' "$(offered draw line tide.yaml -o '')"
same 'options before a command' $'--help\n--version' "$(offered -)"
same 'an option begun' '--unproven' "$(offered build --u)"
same 'options after arguments' '--strict' "$(offered check tide.yaml --s)"
same 'nothing that is not there' '' "$(offered check x)"

cd "$root" || exit 1
same 'every standard of the catalogue' \
	"$("$SCANLATCH" list standards --json | sed -n 's/^      "name": "\(.*\)",$/\1/p' | sort)" "$(offered fit --standard '')"
long_options='(^|[^-A-Za-z])--[a-z]+(-[a-z]+)*'
page=$(sed 's/\\-/-/g; s/\\f.//g' src/command/scanlatch.1)
for command in check build prove diff draw fit lift list schema; do
	options=$("$SCANLATCH" "$command" --help | grep -oE -- "$long_options" | grep -oE -- '--[a-z-]+' | sort -u)
	same "$command: completion offers the options that its help names" "$options" "$(offered "$command" --)"
	for option in $options; do
		holds "the manual page explains $option" grep -qE "^\.(B|BI|BR) .*$option( |\$)" <<<"$page"
	done
done

finish
