# Two commands do everything on a fresh machine: make demo, make test. See README.md.
PYTHON ?= python3
VENV := .venv
BIN := $(VENV)/bin
READY := $(VENV)/.ready
LOGS := sample_logs
.PHONY: setup demo test check bench pictures wheel clean

setup: $(READY)

$(READY): pyproject.toml constraints.txt
	@$(PYTHON) -c 'import sys; sys.exit(sys.version_info < (3, 11))' || { echo "logtool needs Python 3.11 or later; name it: make PYTHON=python3.12 setup"; exit 1; }
	@$(PYTHON) -c 'import ensurepip, venv' 2>/dev/null || { echo "python3-venv is missing; install it with: sudo apt-get install python3-venv"; exit 1; }
	$(PYTHON) -m venv $(VENV)
	$(BIN)/python -m pip install --quiet --disable-pip-version-check --constraint constraints.txt --editable '.[test,check,bench]'
	@touch $@

demo: $(READY)
	@mkdir -p demo
	$(BIN)/logtool check $(LOGS)
	$(BIN)/logtool reach --night 2026-03-07 $(LOGS)
	$(BIN)/logtool senders --night 2026-03-07 $(LOGS)
	$(BIN)/logtool sectors $(LOGS)
	$(BIN)/logtool nights $(LOGS)
	$(BIN)/logtool map --out demo/map.html $(LOGS)
	@echo "The map is demo/map.html: open it in a browser, no network is needed."

test: $(READY)
	$(BIN)/python -m pytest
	$(BIN)/python -m pytest --doctest-modules logtool

check: $(READY)
	$(BIN)/ruff format --check logtool tests scripts
	$(BIN)/ruff check logtool tests scripts
	$(BIN)/mypy
	$(MAKE) test

bench: $(READY)
	$(BIN)/python -m tests.benchmarks.run

pictures: $(READY)
	$(BIN)/python -m pip install --quiet --disable-pip-version-check --constraint constraints.txt pillow
	$(BIN)/python -m tests.docs.picture

wheel: $(READY)
	$(BIN)/python -m pip wheel --quiet --no-deps --wheel-dir dist .

clean:
	rm -rf $(VENV) build dist demo bench *.egg-info
