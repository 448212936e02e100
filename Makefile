# make demo   set up, import the samples, show the reading and the findings, run a search
# make test   set up with the test tools, then lint, types and all tests
# make docs   renew what README and docs/ show of the program
# make bench  the benchmarks, as ratios against a baseline in the same run
# make bounds the quick tests with the lowest and the newest dependencies, on each of PYTHONS
# make dist   sdist and wheel, built twice and compared, used from outside; bill of materials
# make mutants: small faults put into schema/, to see that its tests notice (an hour)
# make shake  the long runs: a thousand kills, a minute of a crowd at one catalog

PYTHON ?= python3
BIN = .venv/bin

.PHONY: demo test lint types docs bench mutants clean

demo: .venv/installed
	@PATH="$(CURDIR)/$(BIN):$$PATH" sh sample_entries/demo.sh

test: lint types
	$(BIN)/pytest -n auto

lint: .venv/tools
	$(BIN)/ruff check .
	$(BIN)/ruff format --check .

types: .venv/tools
	$(BIN)/basedpyright

docs: .venv/tools
	$(BIN)/python -m tests.docs --write

bench: .venv/tools
	$(BIN)/python -m tests.benchmarks

PYTHONS ?= $(PYTHON)
bounds: .venv/tools
	$(BIN)/python -m tests.supply.bounds $(PYTHONS)

dist: .venv/tools
	$(BIN)/python -m tests.supply.wheel --dist dist --bom dist/bom.json

mutants: .venv/tools
	OPENBLAS_NUM_THREADS=1 nice $(BIN)/python -m tests.mutation --write

shake: .venv/tools
	OPENBLAS_NUM_THREADS=1 $(BIN)/python -m tests.robustness.kills --kills 1000
	OPENBLAS_NUM_THREADS=1 $(BIN)/python -m tests.robustness.crowd --seconds 60

.venv/installed: pyproject.toml
	@$(PYTHON) -c 'import sys; sys.exit(sys.version_info < (3, 11))' \
		|| { echo "motorfolio needs Python 3.11 or newer; name one with: make PYTHON=python3.12"; exit 1; }
	test -x $(BIN)/python || $(PYTHON) -m venv .venv
	$(BIN)/python -m pip install --quiet --upgrade pip
	$(BIN)/python -m pip install --quiet --editable .
	@touch $@

.venv/tools: .venv/installed
	$(BIN)/python -m pip install --quiet --group dev
	@touch $@

clean:
	rm -rf .venv demo build dist *.egg-info
