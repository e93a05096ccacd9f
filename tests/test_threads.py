"""Answers do not depend on threads or CPU; work can be interrupted, forked, and does not block."""

import multiprocessing
import os
import signal
import subprocess
import sys
import threading
import time
from collections.abc import Callable, Iterator

import numpy as np
import pytest

import fluxloom as fl
from fluxloom import _core

# Nothing here takes that long; only something that hangs does.
PATIENCE_S = 120
DEPTHS = np.concatenate([np.geomspace(1e-3, 1000.0, 150), np.linspace(4.0, 5.0, 150)])
MOMENTA = np.linspace(-1.3, 1.3, 37)
KICKS = np.linspace(-4.0, 4.0, 301)
LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)


def answers() -> dict[str, bytes]:
    """The bits of everything that is spread over threads."""
    return {
        "energies": fl.band_energies_er(DEPTHS, MOMENTA, count=5).tobytes(),
        "one row": fl.band_energies_er(6.0, np.linspace(-1, 1, 4001), count=32).tobytes(),
        "overlaps": LATTICE.kick_overlap(KICKS, reach=1).tobytes(),
        "bands": LATTICE.bands(count=6, points=501).energies_er.tobytes(),
        "wannier": LATTICE.wannier(band=1).amplitude.tobytes(),
        "flux": fl.flux(spacing_nm=532.0, wavelength_nm=np.linspace(700, 800, 1000)).tobytes(),
    }


@pytest.fixture(autouse=True)
def as_many_threads_as_before() -> Iterator[None]:
    before = _core.build_info()[2]
    yield
    fl.set_threads(before)


def python(
    code: str, *, without: tuple[str, ...] = (), **environment: str
) -> subprocess.CompletedProcess[str]:
    """Run a program of its own, with the environment changed."""
    inherited = {key: value for key, value in os.environ.items() if key not in without}
    done = subprocess.run(
        [sys.executable, "-c", code],
        env={**inherited, **environment},
        capture_output=True,
        text=True,
        timeout=PATIENCE_S,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    return done


# A program that prints a digest of the same answers, found in this very file.
DIGEST = f"""
import hashlib, sys
sys.path.insert(0, {os.path.dirname(os.path.abspath(__file__))!r})
from test_threads import answers
from fluxloom import _core
for name, bits in answers().items():
    print(name, hashlib.sha256(bits).hexdigest())
print(_core.build_info()[1], file=sys.stderr)
"""


def test_answers_do_not_depend_on_the_number_of_threads() -> None:
    fl.set_threads(1)
    alone = answers()
    for threads in (2, 7, 64):
        fl.set_threads(threads)
        assert _core.build_info()[2] == threads
        assert answers() == alone


def test_answers_do_not_depend_on_the_cpu() -> None:
    native, portable = python(DIGEST), python(DIGEST, FLUXLOOM_CPU="baseline")
    assert portable.stderr.strip() == "baseline"
    assert portable.stdout == native.stdout
    assert python(DIGEST, RAYON_NUM_THREADS="3").stdout == native.stdout


def test_the_environment_sets_the_number_of_threads() -> None:
    ask = "import fluxloom._core as core; print(core.build_info()[2])"
    assert python(ask, RAYON_NUM_THREADS="3").stdout.strip() == "3"
    per_core = python(ask, without=("RAYON_NUM_THREADS",)).stdout.strip()
    assert per_core == str(len(os.sched_getaffinity(0)))
    # What is asked for by name wins.
    told = "import fluxloom as fl; fl.set_threads(5); " + ask
    assert python(told, RAYON_NUM_THREADS="3").stdout.strip() == "5"


def forked(queue: "multiprocessing.Queue[tuple[dict[str, bytes], int]]") -> None:
    queue.put((answers(), _core.build_info()[2]))


@pytest.mark.filterwarnings("ignore:.*multi-threaded, use of fork:DeprecationWarning")
def test_a_forked_child_computes_the_same() -> None:
    fl.set_threads(3)
    expected = answers()
    context = multiprocessing.get_context("fork")
    queue = context.Queue()
    children = [context.Process(target=forked, args=(queue,), daemon=True) for _ in range(2)]
    for child in children:
        child.start()
    try:
        for _ in children:
            found, threads = queue.get(timeout=PATIENCE_S)
            assert found == expected
            assert threads == 3
    finally:
        for child in children:
            child.join(timeout=PATIENCE_S)
            child.kill()
    assert [child.exitcode for child in children] == [0, 0]
    # And the parent goes on as before.
    assert answers() == expected


def test_spawned_children_take_objects_and_give_them_back() -> None:
    with multiprocessing.get_context("spawn").Pool(2) as pool:
        lattices = [LATTICE.replace(depth_er=depth) for depth in (3.0, 6.0)]
        bands = pool.map_async(fl.Lattice.bands, lattices).get(timeout=PATIENCE_S)
        assert bands == [lattice.bands() for lattice in lattices]
        pool.close()
        pool.join()


# Each would take far longer than it takes to be interrupted.
LONG = {
    # Too few depths of each size for interpolation to pay.
    "band energies": "fl.band_energies_er(np.geomspace(1e-200, 1e3, 30_000), np.ones(999))",
    "band energies of one depth": "fl.band_energies_er(6.0, np.linspace(-1, 1, 2 * 10**7))",
    "kick overlaps": "lattice.kick_overlap(np.linspace(-3, 3, 10**7))",
    "bands": "[lattice.bands(count=32, points=10**6) for _ in range(100)]",
    "wannier": "lattice.replace(depth_er=6e-4).wannier(points_per_site=4096, sites=900)",
    "wavelengths": "[fl.raman_wavelengths('1/3', wide, range_nm=(100, 101)) for _ in range(100)]",
}
INTERRUPTED = """
import sys
import numpy as np
import fluxloom as fl
lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
wide = fl.Lattice(wavelength_nm=20000.0, depth_er=0.01, angle_deg=1.0)
print("ready", flush=True)
try:
    {}
except KeyboardInterrupt:
    # Afterwards everything works as before.
    assert fl.band_energies_er([3.0, 6.0], 0.0).shape == (2, 1, 4)
    sys.exit(42)
"""


@pytest.mark.parametrize("call", LONG.values(), ids=LONG)
def test_ctrl_c_ends_long_work(call: str) -> None:
    program = subprocess.Popen(
        [sys.executable, "-c", INTERRUPTED.format(call)],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        # A parent that ignores Ctrl-C, as some runners do, would hand that on.
        preexec_fn=lambda: signal.signal(signal.SIGINT, signal.default_int_handler),
    )
    try:
        assert program.stdout.readline() == "ready\n"
        # Into the middle of the work, not into the line before it.
        with pytest.raises(subprocess.TimeoutExpired):
            program.wait(timeout=1.0)
        program.send_signal(signal.SIGINT)
        _, problems = program.communicate(timeout=30)
        assert (program.returncode, problems) == (42, "")
    finally:
        program.kill()
        program.communicate()


def progress_during(work: Callable[[], object]) -> int:
    """How often another thread of Python gets its turn while some work runs."""
    turns = 0
    over = threading.Event()

    def count() -> None:
        nonlocal turns
        while not over.is_set():
            turns += 1
            time.sleep(0)

    counter = threading.Thread(target=count)
    interval = sys.getswitchinterval()
    # Python itself takes no turns away within the work: only letting go of the lock does.
    sys.setswitchinterval(1000.0)
    try:
        counter.start()
        before = turns
        work()
        return turns - before
    finally:
        over.set()
        sys.setswitchinterval(interval)
        counter.join()


# Made beforehand, since numpy lets go of the lock, too.
MANY = np.linspace(1.0, 90.0, 400)
WAVELENGTHS = np.full(10**6, 769.0)


@pytest.mark.parametrize(
    "work",
    [
        lambda: fl.band_energies_er(MANY, MANY),
        lambda: LATTICE.kick_overlap(MANY),
        lambda: LATTICE.wannier(sites=40),
        lambda: LATTICE.bands(points=20_000),
        lambda: LATTICE.replace(depth_er=0.05).onsite_integral(),
        lambda: fl.flux(spacing_nm=532.0, wavelength_nm=WAVELENGTHS),
    ],
    ids=["band energies", "kick overlaps", "wannier", "bands", "onsite integral", "flux"],
)
def test_other_threads_go_on_meanwhile(work: Callable[[], object]) -> None:
    assert progress_during(work) > 0


def test_other_threads_wait_while_the_lock_is_held() -> None:
    # Or else the test above would prove nothing.
    assert progress_during(lambda: sum(range(10**6))) == 0


def test_many_threads_of_python_at_once() -> None:
    expected = answers()
    found: list[dict[str, bytes]] = []
    threads = [threading.Thread(target=lambda: found.append(answers())) for _ in range(4)]
    for thread in threads:
        thread.start()
    for place in (1, 5, 2):
        # The number of threads may change under work that is going on.
        fl.set_threads(place)
    for thread in threads:
        thread.join(timeout=PATIENCE_S)
    assert found == [expected] * 4
