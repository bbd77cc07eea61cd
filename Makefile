# wane: build, tests and installation. `make run` and `make check` are all that most people need; README.md has the rest.
V ?= release
B := build/obj-$(V)
PREFIX ?= /usr/local
DATA ?=
FUZZ_SECONDS ?= 30

CC := gcc
OPT := -O2 -g
XFLAGS :=
SANITIZE := -fsanitize=address,undefined,float-cast-overflow -fno-sanitize-recover=all -fno-omit-frame-pointer
ifeq ($(V),release)
XFLAGS := -U_FORTIFY_SOURCE -D_FORTIFY_SOURCE=3 -fstack-clash-protection
else ifeq ($(V),asan)
CC := clang
OPT := -O1 -g
XFLAGS := $(SANITIZE)
else ifeq ($(V),fuzz)
CC := clang
OPT := -O1 -g
XFLAGS := -fsanitize=fuzzer-no-link $(SANITIZE)
endif
WARN := -Wall -Wextra -Wpedantic -Wshadow -Wconversion -Wformat=2 -Wdate-time -Werror
DEFS := -D_XOPEN_SOURCE=700 -D_DEFAULT_SOURCE -DNCURSES_WIDECHAR=1
# the same bytes of a plan on every machine: no contraction, no fast maths, no -march
ALL := -std=c17 $(WARN) $(DEFS) -I. -ffp-contract=off -fPIE -fstack-protector-strong -ffile-prefix-map=$(CURDIR)=.
LINK := $(OPT) $(XFLAGS) -pie -Wl,-z,relro,-z,now,-z,noexecstack
LIBS := -lncursesw -ltinfo -lsqlite3 -lnova -lm
TESTLIBS := -lcmocka -lerfa -lutil

SRC := $(sort $(wildcard ephem/*.c db/*.c tui/*.c tui/*/*.c))
TESTS := $(sort $(wildcard $(foreach d,unit reference property screen faults,tests/$(d)/*.c)))
FUZZ := $(sort $(wildcard tests/fuzz/*.c))
SUPPORT := $(sort $(wildcard tests/support/*.c))
obj = $(patsubst %.c,$(B)/%.o,$(1))
LIBRARY := $(call obj,$(filter-out tui/main.c,$(SRC))) $(B)/tui/demo_targets.o

.PHONY: all run check bench asan fuzz fuzz-targets soak golden layers deps install uninstall clean tests
.SECONDARY:
all: build/wane

build/wane: build/obj-release/wane
	@cp -f $< $@
ifneq ($(V),release)
build/obj-release/wane:
	@$(MAKE) --no-print-directory V=release $@
endif

$(B)/wane: $(B)/tui/main.o $(B)/wane.a
	@$(CC) $(LINK) $^ $(LIBS) -o $@

$(B)/wane.a: $(LIBRARY)
	@rm -f $@ && ar rcsD $@ $^

$(B)/%.o: %.c Makefile
	@mkdir -p $(@D)
	@$(CC) $(OPT) $(ALL) $(XFLAGS) -MMD -MP -c $< -o $@

# the demo's targets travel inside the program: bytes of the table as signed numbers
$(B)/tui/demo_targets.c: config-example/demo-targets.csv Makefile
	@mkdir -p $(@D)
	@{ printf '#include "tui/demo_data.h"\nconst char demo_targets_csv[] = {\n'; od -An -v -td1 $< | sed 's/\([0-9]\)\( \|$$\)/\1,\2/g'; \
	printf '};\nconst size_t demo_targets_csv_size = sizeof demo_targets_csv;\n'; } >$@
$(B)/tui/demo_targets.o: $(B)/tui/demo_targets.c
	@$(CC) $(OPT) $(ALL) $(XFLAGS) -MMD -MP -c $< -o $@

$(B)/tests/fuzz/%: $(B)/tests/fuzz/%.o $(B)/wane.a
	@$(CC) $(LINK) -fsanitize=fuzzer $^ $(LIBS) -o $@

$(B)/tests/bench/%: $(B)/tests/bench/%.o $(B)/tests/support/timing_sum.o $(B)/wane.a
	@$(CC) $(LINK) $^ $(LIBS) -o $@

$(B)/tests/property/test_ics: TESTLIBS += -lical
$(B)/tests/%: $(B)/tests/%.o $(call obj,$(SUPPORT)) $(B)/wane.a
	@$(CC) $(LINK) $^ $(LIBS) $(TESTLIBS) -o $@

tests: $(patsubst %.c,$(B)/%,$(TESTS)) $(B)/wane
fuzz-targets: $(patsubst %.c,$(B)/%,$(FUZZ))

run:
	@sh tests/deps.sh build
	@$(MAKE) --no-print-directory -s -j2 all
	@build/wane demo

check:
	@sh tests/deps.sh tests
	@WANE_DATA="$(if $(DATA),$(abspath $(DATA)))" sh tests/run.sh

asan soak golden:
	@WANE_DATA="$(if $(DATA),$(abspath $(DATA)))" sh tests/run.sh $@

layers:
	@sh tests/layers.sh

fuzz:
	@$(MAKE) --no-print-directory -s -j2 V=fuzz fuzz-targets
	@sh tests/fuzz/run.sh build/obj-fuzz/tests/fuzz $(FUZZ_SECONDS)

bench: $(B)/tests/bench/bench $(B)/tests/bench/order $(B)/tests/bench/timing $(B)/tests/bench/latency $(B)/wane
	@$<
	@$(B)/tests/bench/order
	@$(B)/tests/bench/timing
	@$(B)/tests/bench/latency $(B)/wane

deps:
	@sh tests/deps.sh all

install: all
	install -D -m 755 build/wane $(DESTDIR)$(PREFIX)/bin/wane
	install -d $(DESTDIR)$(PREFIX)/share/doc/wane/config-example
	install -m 644 README.md LICENSE $(DESTDIR)$(PREFIX)/share/doc/wane
	install -m 644 config-example/* $(DESTDIR)$(PREFIX)/share/doc/wane/config-example

uninstall:
	rm -f $(DESTDIR)$(PREFIX)/bin/wane
	rm -rf $(DESTDIR)$(PREFIX)/share/doc/wane

clean:
	rm -rf build

-include $(wildcard $(B)/*/*.d $(B)/*/*/*.d)
