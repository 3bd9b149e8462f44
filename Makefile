# The only commands a user needs are `make run` and `make test`.
# Needed beforehand: Python 3.11 to 3.14 with its venv module, and make.

STORE ?= data
DEMO_STORE ?= data-demo
PORT ?= 8700
ARGS ?=
# Tests run side by side; each browser test has a server of its own.
WORKERS ?= 2

# The first Python that fits; PYTHON=/path/to/python overrides the search.
FITS := import sys, venv, ensurepip; sys.exit(not (3, 11) <= sys.version_info < (3, 15))
PYTHON ?= $(shell for p in python3 python3.14 python3.13 python3.12 python3.11; do \
	"$$p" -c '$(FITS)' >/dev/null 2>&1 && { echo "$$p"; break; }; done)

VENV := .venv
PY := $(VENV)/bin/python
PIP := $(PY) -m pip install --quiet --disable-pip-version-check --no-input -c .ci/constraints.txt
PINS := pyproject.toml .ci/constraints.txt
CLIENT := static/vendor/LICENCES.txt
AXE := build/client/node_modules/axe-core/axe.min.js

.NOTPARALLEL:
.PHONY: run demo install install-test install-lint install-bench test lint bench clean

run: install
	@exec $(PY) -m app serve --store $(STORE) --port $(PORT)

demo: install
	@exec $(PY) -m app serve --example --store $(DEMO_STORE) --port $(PORT)

test: install-test
	$(PY) -m pytest -n $(WORKERS) --dist worksteal $(ARGS)

lint: install-lint
	$(PY) -m ruff check .
	$(PY) -m ruff format --check .
	$(PY) -m mypy
	$(VENV)/bin/lint-imports
	@! grep -rn '"resolved"' --include=package-lock.json app || { echo "A lock file holds addresses: see app/vendoring/.npmrc."; exit 1; }
	$(PY) .ci/audit.py

bench: install-bench
	$(PY) -m tests.bench $(ARGS)

clean:
	rm -rf $(VENV) build static/vendor *.egg-info .pytest_cache .mypy_cache .ruff_cache .hypothesis .import_linter_cache
	find app tests seed_scenarios -name __pycache__ -type d -prune -exec rm -rf {} +

# What each command installs first. A stamp in .venv remembers it, so that a second run does no work.

install: $(VENV)/with-run $(CLIENT)
install-test: install $(VENV)/with-test $(AXE)
install-lint: install-test $(VENV)/with-lint
install-bench: install-test $(VENV)/with-bench

$(PY):
	@test -n "$(PYTHON)" || { echo "Weirbook needs Python 3.11, 3.12, 3.13 or 3.14 with its venv module (on Debian: python3-venv); none was found on the PATH." >&2; exit 1; }
	$(PYTHON) -m venv $(VENV)

$(VENV)/with-run: $(PINS) | $(PY)
	$(PIP) -e .
	@touch $@

$(VENV)/with-test $(VENV)/with-lint $(VENV)/with-bench: $(VENV)/with-%: $(PINS) | $(VENV)/with-run
	$(PIP) -e '.[$*]'
	@touch $@

$(CLIENT) $(AXE): $(wildcard app/vendoring/*.py app/vendoring/*.json) app/vendoring/.npmrc | $(VENV)/with-run
	@$(PY) -m app.vendoring
	@touch $(CLIENT) $(AXE)
