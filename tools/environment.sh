# Read by tools/demo and tools/test (`. tools/environment.sh`): finds a Python and makes an environment of our own.
# POSIX sh; needs nothing but Python 3.11 or newer.
#
#   ANTISOLAR_PYTHON   the Python to use instead of the first one found
#   ANTISOLAR_ENV      the folder of the environment instead of .venv/<purpose> in the checkout: a new folder, or one
#                      that the same command made

say() {
    printf '%s\n' "antisolar: $*"
}

stop() {
    printf '%s\n' "error: $*" >&2
    exit 2
}

new_enough() {
    "$1" -c 'import sys, venv, ensurepip; sys.exit(sys.version_info < (3, 11))' >/dev/null 2>&1
}

find_python() {
    if [ -n "${ANTISOLAR_PYTHON:-}" ]; then
        new_enough "$ANTISOLAR_PYTHON" ||
            stop "ANTISOLAR_PYTHON=$ANTISOLAR_PYTHON is not a Python of 3.11 or newer with its venv module"
        printf '%s\n' "$ANTISOLAR_PYTHON"
        return
    fi
    for name in python3 python3.13 python3.12 python3.11 python; do
        if new_enough "$name"; then
            command -v "$name"
            return
        fi
    done
    stop "no Python 3.11 or newer with its venv module was found. Install one (on Debian: apt-get install python3 python3-venv), or name it: ANTISOLAR_PYTHON=/path/to/python3 sh $0"
}

# python_of FOLDER: the interpreter inside an environment.
python_of() {
    if [ -x "$1/Scripts/python.exe" ]; then
        printf '%s\n' "$1/Scripts/python.exe"
    else
        printf '%s\n' "$1/bin/python"
    fi
}

# What an environment was made from: while it stays the same, the environment is used as it is.
recipe() {
    printf '%s %s\n' "$1" "$root"
    "$python" -c 'import sys; print(sys.executable, sys.version)'
    cat "$root/pyproject.toml" "$root/renderer/__init__.py"
}

# prepare_environment PURPOSE REQUIREMENT...: sets $environment and $python.
prepare_environment() {
    purpose=$1
    shift
    environment=${ANTISOLAR_ENV:-$root/.venv/$purpose}
    python=$(find_python) || exit 2
    wanted=$(recipe "$*")
    inside=$(python_of "$environment")
    if [ -x "$inside" ] && [ -f "$environment/antisolar-recipe" ] &&
        [ "$(cat "$environment/antisolar-recipe")" = "$wanted" ]; then
        say "using the environment in $environment"
        python=$inside
        return
    fi
    # Only what these tools made is ever emptied: a folder of the user's own choice must carry our mark.
    if [ -n "${ANTISOLAR_ENV:-}" ] && [ -e "$environment" ] && [ ! -f "$environment/antisolar-recipe" ]; then
        rmdir "$environment" 2>/dev/null ||
            stop "$environment exists and was not made by this command; name a new folder with ANTISOLAR_ENV"
    fi
    say "making an environment with $("$python" --version 2>&1) in $environment"
    mkdir -p "$environment" || stop "the folder $environment cannot be made"
    "$python" -m venv --clear "$environment" || stop "Python could not make an environment in $environment"
    : >"$environment/antisolar-recipe"
    inside=$(python_of "$environment")
    say "installing antisolar and what it needs (about 10 to 60 seconds, by the network)"
    (cd "$root" && "$inside" -m pip install --quiet --disable-pip-version-check "$@") ||
        stop "pip could not install what antisolar needs; its own message is above"
    printf '%s\n' "$wanted" >"$environment/antisolar-recipe"
    python=$inside
}

# The command itself, as installed in the environment.
antisolar() {
    "$(dirname -- "$python")/antisolar" "$@"
}
