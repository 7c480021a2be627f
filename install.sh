#!/usr/bin/env bash
# Installs Levelsum for the user who runs it; no root is needed, and running it
# again changes nothing.
#
#   ./install.sh           build, install, register the kernel, run a notebook
#   ./install.sh --lab     the same, and JupyterLab in an environment of its own
#   ./install.sh --remove  take away all that the other two have made
#
# What it writes: the program in $GOBIN or ~/.local/bin, what "levelsum install"
# says, and with --lab a folder below ~/.local/share. Go's own caches are Go's.
set -euo pipefail

lab=no remove=no
case "$#${1-}" in
0) ;;
1--lab) lab=yes ;;
1--remove) remove=yes ;;
1-h | 1--help)
	sed -n '2,/^[^#]/s/^# \{0,1\}//p' "$0"
	exit 0
	;;
*)
	echo "usage: ./install.sh [--lab | --remove]" >&2
	exit 2
	;;
esac

# The versions that --lab installs.
lab_packages="jupyterlab==4.6.6 nbclient==0.11.0"
notebook=notebooks/copper-heat-capacity.ipynb

here=$(cd "$(dirname "$0")" && pwd)
cd "$here"

say() { printf '%s\n' "$*"; }
stop() {
	printf 'install.sh: %s\n' "$1" >&2
	shift
	for line in "$@"; do printf '  %s\n' "$line" >&2; done
	exit 1
}

[ -n "${HOME-}" ] || stop "HOME is not set; it is where the kernel is registered."
lab_env=${XDG_DATA_HOME:-$HOME/.local/share}/levelsum/lab

# Removing works without Go too, unless "go env -w" chose the folder.
if [ "$remove" = yes ]; then
	bin=${GOBIN:-$(go env GOBIN 2>/dev/null || true)}
	program=${bin:-$HOME/.local/bin}/levelsum
	if [ -x "$program" ]; then
		"$program" remove
		rm -f "$program"
		say "removed $program"
	else
		say "there is no $program"
	fi
	if [ -e "$lab_env" ]; then
		rm -rf "$lab_env"
		rmdir "$(dirname "$lab_env")" 2>/dev/null || true
		say "removed the environment with JupyterLab: $lab_env"
	fi
	exit 0
fi

# Go. With 1.21 or newer "go" fetches the version that go.mod asks for.
command -v go >/dev/null || stop "Go 1.26 or newer is needed and not found." \
	"Get it from https://go.dev/dl/ (unpack it, put its bin folder into PATH)," \
	"or from your system: dnf install golang, pacman -S go, brew install go."
if ! have=$(go env GOVERSION 2>&1); then
	stop "Go 1.26 or newer is needed; this one cannot build Levelsum:" "$have" \
		"Get a newer one from https://go.dev/dl/ or allow GOTOOLCHAIN=auto."
fi
minor=$(printf '%s' "$have" | sed -n 's/^go1\.\([0-9]*\).*/\1/p')
if [ -n "$minor" ] && [ "$minor" -lt 26 ]; then
	stop "Go 1.26 or newer is needed; this is $have." "Get it from https://go.dev/dl/."
fi

# A C compiler: cells are compiled as plugins, which Go links with it.
cc=$(go env CC)
if ! command -v "${cc%% *}" >/dev/null; then
	stop "a C compiler is needed (Go's plugins are linked with it); '$cc' is not found." \
		"Debian, Ubuntu:  sudo apt-get install gcc libc6-dev" \
		"Fedora:          sudo dnf install gcc" \
		"Arch:            sudo pacman -S gcc" \
		"macOS:           xcode-select --install"
fi

bin=$(go env GOBIN)
[ -n "$bin" ] || bin=$HOME/.local/bin
mkdir -p "$bin" && [ -w "$bin" ] || stop "$bin cannot be written; set GOBIN to a folder that can."

say "building levelsum ($have); the first time Go fetches the packages that it needs"
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
CGO_ENABLED=1 go build -trimpath -buildvcs=false -o "$work/levelsum" ./kernel/levelsum 2>"$work/said" || {
	grep -v '^go: downloading' "$work/said" | head -n 5 >&2 || true
	stop "levelsum could not be built; the first lines of what Go said are above." \
		"If packages could not be fetched: the first build needs a network (or a proxy, see" \
		"'go help goproxy'). Later ones take them from $(go env GOMODCACHE)." \
		"If a folder cannot be written: GOCACHE and GOMODCACHE name others."
}
if cmp -s "$work/levelsum" "$bin/levelsum"; then
	say "$bin/levelsum is up to date"
else
	cp "$work/levelsum" "$bin/.levelsum.new"
	mv "$bin/.levelsum.new" "$bin/levelsum"
	say "$bin/levelsum installed"
fi

"$bin/levelsum" install -source "$here"

say "running $notebook"
"$bin/levelsum" run -o "$work/out.ipynb" "$notebook"
say
say "Installed. Open $notebook"
say "in JupyterLab or another Jupyter front end and choose the kernel Levelsum (Go)."
case ":$PATH:" in
*":$bin:"*) ;;
*) say "$bin is not in your PATH: add it to type levelsum without the folder." ;;
esac

[ "$lab" = yes ] || exit 0

command -v python3 >/dev/null || stop "--lab needs Python 3.10 or newer, which is not found."
env=$lab_env
if [ "$(cat "$env/levelsum-packages" 2>/dev/null)" != "$lab_packages" ]; then
	say "making an environment with JupyterLab in $env"
	python3 -m venv "$env" || stop "python3 cannot make a virtual environment." \
		"Debian, Ubuntu:  sudo apt-get install python3-venv"
	# shellcheck disable=SC2086  # a list of packages
	"$env/bin/pip" install --quiet --disable-pip-version-check $lab_packages
	printf '%s\n' "$lab_packages" >"$env/levelsum-packages"
fi
# Go's indentation. The editor moves a typed } back at the first level only, so
# it is to write the closing one itself. JupyterLab's news are not asked for.
mkdir -p "$env/share/jupyter/lab/settings"
cat >"$env/share/jupyter/lab/settings/overrides.json" <<'END'
{
  "@jupyterlab/notebook-extension:tracker": {
    "codeCellConfig": {"lineNumbers": false, "lineWrap": false, "indentUnit": "Tab", "autoClosingBrackets": true}
  },
  "@jupyterlab/apputils-extension:notification": {"fetchNews": "false", "checkForUpdates": false}
}
END
"$bin/levelsum" install -prefix "$env" -source "$here" # an active environment may hold the kernel
rm -rf "$work" # exec leaves no trap
root=()
[ "$(id -u)" != 0 ] || root=(--allow-root) # JupyterLab asks for it
exec "$env/bin/jupyter-lab" "${root[@]}" "$notebook"
