# Builds scanlatch. `make help` lists the targets. Everything built goes under $(BUILD).
#
#   CC, CFLAGS, LDFLAGS   as usual; CFLAGS replaces only "-O2 -g", never the language and warning flags
#   WERROR=1              warnings are errors
#   BUILD=FOLDER          build there, so that builds of different kinds stand side by side
#   FOLDER=base           let `check` run only tests/base
#   PREFIX, DESTDIR       where `install` puts things
#   V=1                   show every command whole
#   NO_INSTALL=1          never install packages; GET_PACKAGES=: leaves the question of packages to you

ifneq ($(filter check-sanitize,$(MAKECMDGOALS)),)
ifneq ($(words $(MAKECMDGOALS)),1)
$(error check-sanitize builds with flags of its own: run it alone)
endif
SANITIZE = -fsanitize=address,undefined -fno-sanitize-recover=all -fno-omit-frame-pointer
BUILD ?= build/sanitize
endif

BUILD ?= build
FOLDER ?= *
CFLAGS ?= -O2 -g
PREFIX ?= /usr/local
INSTALLED = $(DESTDIR)$(PREFIX)
GET_PACKAGES ?= tools/get-packages

PACKAGE_FLAGS := $(shell pkg-config --cflags yaml-0.1 jansson 2>/dev/null)
PACKAGE_LIBRARIES := $(shell pkg-config --libs yaml-0.1 jansson 2>/dev/null || echo -lyaml -ljansson)

WARNINGS = -Wall -Wextra -Wpedantic -Wconversion -Wshadow -Wstrict-prototypes -Wmissing-prototypes \
	-Wcast-qual -Wwrite-strings -Wundef -Wvla $(if $(filter 1,$(WERROR)),-Werror)
FLAGS = -std=c11 -D_POSIX_C_SOURCE=200809L $(WARNINGS) -Isrc -Iinclude -I$(BUILD)/generated \
	$(PACKAGE_FLAGS) $(CPPFLAGS) $(CFLAGS) $(SANITIZE)
LIBRARIES = $(PACKAGE_LIBRARIES) -lz -pthread

# Commands are shown as a word and a file; whole with V=1.
QUIET = $(if $(filter 1,$(V)),,@)
say = $(if $(QUIET),@echo '  $(1)  $(2)')

PROGRAM = $(BUILD)/scanlatch
LIBRARY = $(BUILD)/libscanlatch.a
CATALOGUE_DATA = $(BUILD)/generated/catalogue_data.c
REPORT_DATA = $(BUILD)/generated/report_data.c

PAGE_DATA = $(BUILD)/generated/page_data.c

CATALOGUES = $(wildcard src/catalogue/*.yaml)
PAGE_FILES = src/view/sheet.css src/view/sheet.js
REPORT_DEFINITIONS = $(sort $(wildcard src/view/reports/shared/*.json))
REPORT_NAMES = $(sort $(notdir $(basename $(wildcard src/view/reports/*.json))))
REPORTS = $(REPORT_NAMES:%=src/view/reports/%.json) $(REPORT_DEFINITIONS)
SOURCES = $(wildcard src/*/*.c src/*.c)
PROGRAM_SOURCES = $(filter src/command/%,$(SOURCES))
LIBRARY_SOURCES = $(filter-out src/command/%,$(SOURCES))
PROGRAM_OBJECTS = $(PROGRAM_SOURCES:src/%.c=$(BUILD)/obj/%.o)
LIBRARY_OBJECTS = $(LIBRARY_SOURCES:src/%.c=$(BUILD)/obj/%.o) $(BUILD)/obj/generated/catalogue_data.o \
	$(BUILD)/obj/generated/page_data.o $(BUILD)/obj/generated/report_data.o

TEST_PROGRAMS = $(patsubst tests/%.c,$(BUILD)/tests/%,$(wildcard tests/$(FOLDER)/test_*.c))
TEST_SCRIPTS = $(wildcard tests/$(FOLDER)/*.sh)
BENCH_PROGRAMS = $(patsubst tools/%.c,$(BUILD)/%,$(wildcard tools/bench/*.c))
FUZZ_PROGRAMS = $(patsubst tools/%.c,$(BUILD)/%,$(wildcard tools/fuzz/*.c))
CLIENTS = $(TEST_PROGRAMS) $(BENCH_PROGRAMS) $(FUZZ_PROGRAMS)

# Only these goals may install packages; then nothing is compiled before the packages are there.
PACKAGE_SETS = $(if $(filter demo check check-sanitize bench fuzz,$(MAKECMDGOALS)),build) \
	$(if $(filter check check-sanitize,$(MAKECMDGOALS)),test) $(if $(filter bench,$(MAKECMDGOALS)),bench)
PACKAGES = $(if $(strip $(PACKAGE_SETS)),packages)

.PHONY: all demo check check-sanitize bench fuzz install clean help packages FORCE
.DELETE_ON_ERROR:
.SUFFIXES:

all: $(PROGRAM) $(LIBRARY)

help:
	@echo 'make                 build $(PROGRAM) and $(LIBRARY)'
	@echo 'make demo            build the images of a demo plan into $(BUILD)/demo and print the proofs'
	@echo 'make check           run all tests'
	@echo 'make check-sanitize  run all tests with address and undefined-behaviour sanitizers'
	@echo 'make bench           measure speed'
	@echo 'make fuzz            feed the program random plans and images for a while'
	@echo 'make install         install under PREFIX ($(PREFIX)); DESTDIR is honoured'
	@echo 'make clean           remove $(BUILD)'
	@echo 'Variables: V=1 CC CFLAGS LDFLAGS WERROR=1 BUILD=FOLDER FOLDER=base PREFIX DESTDIR NO_INSTALL=1'

packages:
	@$(GET_PACKAGES) $(PACKAGE_SETS)

$(PROGRAM): $(PROGRAM_OBJECTS) $(LIBRARY)
	$(call say,LINK,$@)
	$(QUIET)$(CC) $(FLAGS) $(LDFLAGS) -o $@ $(PROGRAM_OBJECTS) $(LIBRARY) $(LIBRARIES)

# From scratch, so that no member outlives its source.
$(LIBRARY): $(LIBRARY_OBJECTS) $(BUILD)/members
	$(call say,AR  ,$@)
	$(QUIET)rm -f $@
	$(QUIET)$(AR) rcs $@ $(LIBRARY_OBJECTS)

$(BUILD)/obj/%.o: src/%.c $(BUILD)/flags | $(PACKAGES)
	@mkdir -p $(@D)
	$(call say,CC  ,$<)
	$(QUIET)$(CC) $(FLAGS) -MMD -MP -c -o $@ $<

$(BUILD)/obj/generated/%.o: $(BUILD)/generated/%.c $(BUILD)/flags | $(PACKAGES)
	@mkdir -p $(@D)
	$(call say,CC  ,$<)
	$(QUIET)$(CC) $(FLAGS) -MMD -MP -c -o $@ $<

# Each file as an array of its bytes, a NUL after them, and its length without the NUL. $(1): what names begin with, $(2): their header,
# $(3): the files.
define as_arrays
	@mkdir -p $(@D)
	$(call say,DATA,$@)
	$(QUIET){ echo '#include "$(2)"'; \
	for file in $(3); do \
		name=$$(basename "$$file" .yaml | tr .- __); \
		echo "const unsigned char $(1)_$$name[] = {"; \
		od -An -v -tx1 "$$file" | sed 's/ *\([0-9a-f][0-9a-f]\)/0x\1,/g'; \
		echo "0x00};"; \
		echo "const size_t $(1)_$${name}_length = sizeof $(1)_$$name - 1;"; \
	done; } > $@
endef

$(CATALOGUE_DATA): $(CATALOGUES)
	$(call as_arrays,catalogue,catalogue/data.h,$^)

$(PAGE_DATA): $(PAGE_FILES)
	$(call as_arrays,page,view/page_data.h,$^)

# The schema of each report, with the definitions that it uses: a table of names and texts, then an entry without a name.
$(REPORT_DATA): $(REPORTS) tools/report-schema.awk $(BUILD)/reports
	@mkdir -p $(@D)
	$(call say,DATA,$@)
	$(QUIET){ echo '#include "view/reports.h"'; \
	table=; \
	for name in $(REPORT_NAMES); do \
		awk -f tools/report-schema.awk "src/view/reports/$$name.json" $(REPORT_DEFINITIONS) > $@.json || exit; \
		data=$$(echo "data_$$name" | tr - _); \
		echo "static const unsigned char $$data[] = {"; \
		od -An -v -tx1 $@.json | sed 's/ *\([0-9a-f][0-9a-f]\)/0x\1,/g'; \
		echo "};"; \
		table="$$table{\"$$name\", $$data, sizeof $$data}, "; \
	done; \
	echo "const struct report_schema report_schemas[] = {$$table{NULL, NULL, 0}};"; } > $@.part
	$(QUIET)mv $@.part $@

$(TEST_PROGRAMS): CLIENT_LIBRARIES = -lcmocka
$(TEST_PROGRAMS): $(BUILD)/tests/%: tests/%.c
$(BENCH_PROGRAMS) $(FUZZ_PROGRAMS): $(BUILD)/%: tools/%.c
$(CLIENTS): $(LIBRARY) $(BUILD)/flags | $(PACKAGES)
	@mkdir -p $(@D)
	$(call say,CC  ,$@)
	$(QUIET)$(CC) $(FLAGS) -MMD -MP -MF $@.d $(LDFLAGS) -o $@ $(firstword $(filter tests/%.c tools/%.c,$^)) $(LIBRARY) $(CLIENT_LIBRARIES) $(LIBRARIES)

# What was compiled last time, so that other flags or a vanished source lead to a new build.
$(BUILD)/flags: export STAMP = $(CC) $(FLAGS)
$(BUILD)/members: export STAMP = $(LIBRARY_OBJECTS)
$(BUILD)/reports: export STAMP = $(REPORTS)
$(BUILD)/flags $(BUILD)/members $(BUILD)/reports: FORCE
	@mkdir -p $(@D)
	@printf '%s\n' "$$STAMP" | cmp -s - $@ || printf '%s\n' "$$STAMP" > $@

demo: $(PROGRAM) | $(PACKAGES)
	$(PROGRAM) build plans/tide-board-60.yaml -o $(BUILD)/demo

check check-sanitize: $(PROGRAM) $(TEST_PROGRAMS) | $(PACKAGES)
	@SCANLATCH='$(PROGRAM)' BUILD='$(BUILD)' CC='$(CC)' tools/run-tests $(TEST_PROGRAMS) $(TEST_SCRIPTS)

bench: $(PROGRAM) $(BENCH_PROGRAMS) | $(PACKAGES)
	@SCANLATCH='$(PROGRAM)' BUILD='$(BUILD)' tools/bench/run

fuzz: $(PROGRAM) $(FUZZ_PROGRAMS) | $(PACKAGES)
	@SCANLATCH='$(PROGRAM)' BUILD='$(BUILD)' tools/fuzz/run

install: $(PROGRAM) $(LIBRARY) $(BUILD)/scanlatch.pc
	install -d '$(INSTALLED)/bin' '$(INSTALLED)/lib/pkgconfig' '$(INSTALLED)/include/scanlatch' \
		'$(INSTALLED)/share/man/man1' '$(INSTALLED)/share/bash-completion/completions' \
		'$(INSTALLED)/share/doc/scanlatch/plans'
	install -m 755 $(PROGRAM) '$(INSTALLED)/bin/scanlatch'
	install -m 644 $(LIBRARY) '$(INSTALLED)/lib/libscanlatch.a'
	install -m 644 $(BUILD)/scanlatch.pc '$(INSTALLED)/lib/pkgconfig/scanlatch.pc'
	install -m 644 include/scanlatch/scanlatch.h '$(INSTALLED)/include/scanlatch/scanlatch.h'
	install -m 644 src/command/scanlatch.1 '$(INSTALLED)/share/man/man1/scanlatch.1'
	install -m 644 src/command/scanlatch.bash-completion '$(INSTALLED)/share/bash-completion/completions/scanlatch'
	install -m 644 README.md LICENSE '$(INSTALLED)/share/doc/scanlatch'
	install -m 644 plans/README.md plans/*.yaml '$(INSTALLED)/share/doc/scanlatch/plans'

# The library is static, so that whoever links it links what it uses.
$(BUILD)/scanlatch.pc: include/scanlatch/scanlatch.h FORCE
	@mkdir -p $(@D)
	@version=$$(sed -n 's/^#define SCANLATCH_VERSION "\([^"]*\)"$$/\1/p' $<); \
	test -n "$$version" || { echo 'error: $< defines no SCANLATCH_VERSION' >&2; exit 1; }; \
	printf '%s\n' 'prefix=$(PREFIX)' 'includedir=$${prefix}/include' 'libdir=$${prefix}/lib' '' 'Name: scanlatch' \
		'Description: fills the EEPROMs of raster sequencers and proves their images' \
		"Version: $$version" 'Requires: yaml-0.1 jansson zlib' \
		'Cflags: -I$${includedir}' 'Libs: -L$${libdir} -lscanlatch' > $@

clean:
	rm -rf $(BUILD)

-include $(PROGRAM_OBJECTS:.o=.d) $(LIBRARY_OBJECTS:.o=.d) $(CLIENTS:=.d)
