# `make demo` and `make test` do all their set-up on a Debian or Ubuntu machine that has cargo,
# gcc, make and python3. The other targets are for people who work on the program.

SHELL := /bin/bash
.SHELLFLAGS := -euo pipefail -c
.DEFAULT_GOAL := help

# RUSTFLAGS would replace the processor level in .cargo/config.toml, RUSTDOCFLAGS the one for
# documentation tests, and the interval arithmetic would not compile.
ifneq ($(RUSTFLAGS)$(CARGO_ENCODED_RUSTFLAGS)$(RUSTDOCFLAGS),)
$(info Leaving out RUSTFLAGS and RUSTDOCFLAGS from the environment: .cargo/config.toml sets them.)
endif
unexport RUSTFLAGS
unexport CARGO_ENCODED_RUSTFLAGS
unexport RUSTDOCFLAGS
unexport CARGO_ENCODED_RUSTDOCFLAGS

TARGET_DIR := $(or $(CARGO_TARGET_DIR),target)
BOUNDMARK := $(TARGET_DIR)/release/boundmark
# Where rustup puts cargo, for shells that have not read its profile yet.
export PATH := $(PATH):$(HOME)/.cargo/bin

# Seconds for each fuzz target of `make fuzz`.
FUZZ_SECONDS ?= 20

.PHONY: help demo test build tools lint-tools certificates bench campaign fuzz

help:
	@echo 'make demo          build, and audit the worked examples in certificates/'
	@echo 'make test          formatting, lints, tests, documentation, check of the outside values'
	@echo 'make certificates  prove the worked examples again and write their certificates'
	@echo 'make bench         pieces per second, beside sampling'
	@echo 'make campaign      audit all published approximations in tests/outside'
	@echo 'make fuzz          each fuzz target for FUZZ_SECONDS=$(FUZZ_SECONDS) seconds (needs cargo-fuzz)'

# One of the worked audits is meant to fail, so the program's exit code is 1 here.
demo: build
	@code=0; $(BOUNDMARK) audit certificates || code=$$?; \
	echo; \
	echo "boundmark ended with exit code $$code"; \
	if [ $$code -ne 1 ]; then \
	  echo 'Expected 1: every claim holds but those of partial-tuner-edited, which are meant to fail.'; \
	  exit 1; \
	fi; \
	echo 'As it should: 1 says that a claim fails, and partial-tuner-edited, whose table has one'; \
	echo 'damaged digit, is here to fail. In a build this code would stop the shipment.'

test: lint-tools
	cargo fmt --all --check
	cargo clippy --locked --all-targets -- -D warnings
	@if cargo nextest --version >/dev/null 2>&1; then \
	  echo 'cargo nextest run --locked'; cargo nextest run --locked; \
	  echo 'cargo test --locked --doc'; cargo test --locked --doc; \
	else \
	  echo 'cargo test --locked'; cargo test --locked; \
	fi
	cargo rustdoc --locked --lib -- -D warnings
	python3 tests/outside/make_audits.py --check

build: tools
	cargo build --locked --release

certificates: build
	@code=0; $(BOUNDMARK) audit certificates --out certificates || code=$$?; \
	[ $$code -eq 1 ] || { echo "exit code $$code, expected 1 (partial-tuner-edited fails)"; exit 1; }

bench: tools
	cargo bench --locked --bench pieces

# Compares every enclosure and verdict with tests/outside/expected.json and writes the record
# tests/outside/campaign.md, also where something is not as expected.
campaign: tools
	BOUNDMARK_CAMPAIGN=1 cargo test --locked --release --test campaign -- --nocapture

# cargo-fuzz asks for a nightly compiler; RUSTC_BOOTSTRAP lets the stable one do. Its own flags
# reach the compiler through RUSTFLAGS, so the processor level has to stand there too.
# The worked audits are seeds.
fuzz: tools
	@cargo fuzz --version >/dev/null 2>&1 || { echo 'Install it first: cargo install cargo-fuzz'; exit 1; }
	@for target in literal formula audit_file; do \
	  echo "fuzz target $$target"; \
	  mkdir -p fuzz/corpus/$$target; \
	  RUSTC_BOOTSTRAP=1 RUSTFLAGS='$(if $(filter x86_64,$(shell uname -m)),-Ctarget-cpu=x86-64-v3)' \
	    cargo fuzz run $$target fuzz/corpus/$$target certificates -- -max_total_time=$(FUZZ_SECONDS); \
	done

tools:
	@.ci/tools

lint-tools:
	@.ci/tools lints
