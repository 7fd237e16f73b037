# Sourced by the other scripts: makes .venv and installs Bedstone with its development tools,
# once, and again only when pyproject.toml has changed. Sets PYTHON; expects the folder of the
# project to be the current one. Messages go to stderr.

find_python() {
    for name in python3.13 python3.12 python3.11 python3; do
        if command -v "$name" >/dev/null 2>&1 &&
            "$name" -c 'import sys; sys.exit(sys.version_info < (3, 11))' 2>/dev/null; then
            echo "$name"
            return 0
        fi
    done
    found=$(python3 --version 2>/dev/null || echo "no python3 at all")
    echo "Bedstone needs Python 3.11 or newer on the PATH; found $found." >&2
    return 1
}

VENV=.venv
PYTHON=$VENV/bin/python
STAMP=$VENV/bedstone-installed

if ! "$PYTHON" -c 'import pip' >/dev/null 2>&1; then
    base=$(find_python) || exit 2
    echo "Making $VENV with $($base --version) ..." >&2
    if ! "$base" -m venv --clear "$VENV" >&2; then
        echo "$base cannot make a virtual environment; on Debian and Ubuntu: apt-get install python3-venv" >&2
        exit 2
    fi
fi

if [ ! -e "$STAMP" ] || [ -n "$(find pyproject.toml -newer "$STAMP")" ]; then
    echo "Installing Bedstone and its tools into $VENV ..." >&2
    "$PYTHON" -m pip install --quiet --disable-pip-version-check -e ".[dev]" </dev/null >&2 || {
        echo "The installation failed; the message of pip stands above." >&2
        exit 2
    }
    touch "$STAMP"
fi
