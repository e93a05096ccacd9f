# Set-up and checks; needs a Rust toolchain and Python 3.11 or later with pip.
# Everything else goes into a private environment below build/.

PYTHON ?= python3
VENV := build/venv
ifeq ($(OS),Windows_NT)
BIN := $(VENV)/Scripts
else
BIN := $(VENV)/bin
endif
WHEELS := build/wheels
# One profile for everything, so that nothing is compiled twice.
CARGO_FLAGS := --release --locked --workspace
BAY := notebooks-examples/tern_bay.toml

.PHONY: demo test test-rust test-python lint wheel bench bench-peers reference clean

# A check that meets the target, one that misses it and says what to change, and
# the picture of the second.
demo: wheel
	$(BIN)/fluxloom check $(BAY) --target 3/8 --figure build/check-meets.png
	@echo
	@$(BIN)/fluxloom check $(BAY) --target 3/8 --set raman.angle_deg=180 --figure build/check-misses.png; \
	if [ $$? -ne 1 ]; then echo "the second check was expected to miss"; exit 1; fi
	@echo
	$(BIN)/python notebooks-examples/lattice_bands.py build/bands.png

test: lint test-rust test-python

lint: $(VENV)/tools
	cargo fmt --all --check
	cargo clippy $(CARGO_FLAGS) --all-targets -- -D warnings
	RUSTDOCFLAGS="-D warnings" cargo doc --release --locked --no-deps -p fluxloom-kernel -p fluxloom-core -p fluxloom-plan
	$(BIN)/ruff check python tests benches notebooks-examples
	$(BIN)/ruff format --check python tests benches notebooks-examples

# The extension module is tested from Python. A fixed seed draws the same examples
# every time; another PROPTEST_RNG_SEED draws others.
export PROPTEST_RNG_SEED ?= 1
test-rust:
	cargo test $(CARGO_FLAGS) --exclude fluxloom-python
	FLUXLOOM_CPU=baseline cargo test $(CARGO_FLAGS) --exclude fluxloom-python --lib --tests
	cargo check --release --locked -p fluxloom-core --no-default-features

test-python: wheel $(VENV)/tools
	$(BIN)/python -m pytest -q tests

wheel: $(VENV)/ready
	$(BIN)/maturin build --release --locked --quiet --interpreter $(BIN)/python --out $(WHEELS)
	$(BIN)/python -m pip install --quiet --force-reinstall --no-deps --no-index --find-links $(WHEELS) fluxloom

$(VENV)/ready:
	$(PYTHON) -m venv $(VENV)
	$(BIN)/python -m pip install --quiet "maturin>=1.9,<2" "numpy>=1.26" "matplotlib>=3.8"
	$(BIN)/python -c "open('$(VENV)/ready', 'w').close()"

$(VENV)/tools: $(VENV)/ready pyproject.toml
	$(BIN)/python -m pip install --quiet "pandas>=2.0" "xarray>=2024.1" "hypothesis>=6.100" "ipykernel>=6.29" "mpmath>=1.3" "mypy>=1.11" "nbclient>=0.10" "pytest>=8" "ruff>=0.9" "scipy>=1.17" "sympy>=1.13"
	$(BIN)/python -c "open('$(VENV)/tools', 'w').close()"

# Speed, in one run each; nothing else should run meanwhile.
bench:
	RAYON_NUM_THREADS=1 cargo bench --locked -p fluxloom-core -p fluxloom-plan --benches

bench-peers: wheel $(VENV)/tools
	$(BIN)/python benches/bands_against_numpy.py
	$(BIN)/python benches/light_against_numpy.py

# Makes the outside data of the Rust tests anew.
reference: $(VENV)/tools
	$(BIN)/python -m pip install --quiet "mendeleev==1.3.0"
	$(BIN)/python tests/reference/make_band_energies.py
	$(BIN)/python tests/reference/make_masses.py tests/reference/masses.json
	$(BIN)/python tests/reference/make_wigner.py

clean:
	cargo clean
	rm -rf build
