# Two commands are all a newcomer needs: make demo, make test.
VENV := .venv
BIN := $(VENV)/bin
READY := $(VENV)/.ready

.PHONY: demo testdata test check bench clean

$(READY): pyproject.toml constraints.txt
	python3 -m venv $(VENV)
	$(BIN)/python -m pip install --quiet --constraint constraints.txt --editable '.[test,dev]'
	touch $(READY)

demo: $(READY)
	$(BIN)/socibrain link analyses/brokers/plan.yaml --out runs/demo
	$(BIN)/socibrain report runs/demo

testdata: $(READY)
	$(BIN)/python tests/references/fetch.py

test: testdata
	$(BIN)/python -m pytest

check: $(READY)
	$(BIN)/ruff format --check .
	$(BIN)/ruff check .
	$(BIN)/mypy
	$(MAKE) test

bench: $(READY)
	$(BIN)/python -m tests.benchmarks

clean:
	rm -rf $(VENV) runs .mypy_cache .ruff_cache .pytest_cache
