# Sourced by the run scripts, from the top of the checkout: makes .venv once, from locked versions, and reuses it while
# neither the lock nor the project file has changed.
find_python() {
    for candidate in python3.11 python3.12 python3.13 python3 python; do
        if command -v "$candidate" >/dev/null 2>&1 &&
            "$candidate" -c 'import sys; sys.exit(sys.version_info < (3, 11))' 2>/dev/null; then
            echo "$candidate"
            return
        fi
    done
    echo "boomwright needs Python 3.11 or later; none of python3.11, python3, python on PATH is" >&2
    exit 4
}

setup() {
    stamp=$(cat .ci/lock.txt pyproject.toml .ci/setup.sh | cksum)
    if [ -x .venv/bin/boomwright ] && [ "$(cat .venv/stamp 2>/dev/null)" = "$stamp" ]; then
        return
    fi
    python=$(find_python) || exit 4
    if ! "$python" -c 'import venv, ensurepip' 2>/dev/null; then
        echo "boomwright needs Python's venv module (Debian: apt-get install python3-venv)" >&2
        exit 4
    fi
    echo "setting up .venv from .ci/lock.txt (once)" >&2
    rm -rf .venv
    "$python" -m venv .venv
    .venv/bin/python -m pip install --quiet --disable-pip-version-check -r .ci/lock.txt
    .venv/bin/python -m pip install --quiet --disable-pip-version-check --no-deps --no-build-isolation -e .
    if ! .venv/bin/python -c 'import OCP.gp' 2>.venv/import-error; then
        echo "the CAD kernel cannot be loaded; a system library is missing:" >&2
        tail -n 1 .venv/import-error >&2
        echo "(Debian: apt-get install libgl1 libxrender1 libxext6)" >&2
        exit 4
    fi
    echo "$stamp" >.venv/stamp
}

setup
