# Each command makes ready what it needs by itself; see .ci/environment.
.DEFAULT_GOAL := help
.PHONY: help demo test bench watch-score pictures lint format locale lock upgrade wheel wheelhouse clean

PYTHON := .venv/bin/python

help:
	@echo "make demo        see it run: a made-up tankhouse on 127.0.0.1"
	@echo "make test        see it pass its tests: both databases, published values, a real browser"
	@echo "make bench       how fast it is, as ratios on this machine"
	@echo "make watch-score how well the watch sees, on made-up plants; WRITE=1 puts it into DEVELOPERS.md"
	@echo "make pictures    every page of the demo, at a desk and on a phone, into build/pictures/"
	@echo "make lint        formatter, linter and type checker"
	@echo "make format      let the formatter decide"
	@echo "make locale      the texts of the pages into the catalogues of every language"
	@echo "make lock        the lock files anew, after pyproject.toml changed"
	@echo "make upgrade     the lock files with everything at its newest"
	@echo "make wheel       the package, into dist/"
	@echo "make wheelhouse  the package and all it needs for a site without internet, into dist/wheelhouse/"

demo:
	@.ci/environment runtime
	@.venv/bin/ampledger demo

test:
	@.ci/environment dev
	@.ci/environment browser
	@$(PYTHON) -m pytest -n logical --dist worksteal

bench:
	@.ci/environment dev
	@$(PYTHON) -m tests.bench

watch-score:
	@.ci/environment dev
	@$(PYTHON) -m tests.watch.score $(if $(WRITE),--write)

pictures:
	@.ci/environment dev
	@.ci/environment browser
	@$(PYTHON) -m tests.pictures $(if $(README),--readme)

lint:
	@.ci/environment dev
	@$(PYTHON) -m ruff format --check .
	@$(PYTHON) -m ruff check .
	@$(PYTHON) -m mypy

format:
	@.ci/environment dev
	@$(PYTHON) -m ruff format .
	@$(PYTHON) -m ruff check --fix .

locale:
	@.ci/environment dev
	@$(PYTHON) -m babel.messages.frontend --quiet extract
	@$(PYTHON) -m babel.messages.frontend --quiet update

lock:
	@.ci/environment lock

upgrade:
	@.ci/environment lock --upgrade

wheel:
	@.ci/environment runtime
	@$(PYTHON) -m pip wheel --quiet --no-deps --no-build-isolation --wheel-dir dist .
	@ls -1 dist/*.whl

wheelhouse: wheel
	@$(PYTHON) -m pip download --quiet --require-hashes -r requirements.lock --dest dist/wheelhouse
	@cp dist/ampledger-*.whl dist/wheelhouse/
	@du -sh dist/wheelhouse

clean:
	@rm -rf .venv dist build .pytest_cache .mypy_cache .ruff_cache .hypothesis .coverage htmlcov
