# Shared by scripts/demo and scripts/test; sourced by bash. Brings a bare Debian to a built Runband.
set -euo pipefail
cd "$(dirname "${BASH_SOURCE[0]}")/../.."
readonly ROOT=$PWD
readonly BUILD=$ROOT/build
started=$SECONDS

say() { printf '%s\n' "$*"; }
step() { printf '\n== %s (%s s)\n' "$*" $((SECONDS - started)); }
die() { printf 'scripts: %s\n' "$*" >&2; exit 1; }

# need_packages MARK...: installs through apt what the list names under these marks and the machine lacks.
need_packages() {
  command -v dpkg-query >/dev/null 2>&1 || {
    say "This is not Debian: expecting the equivalents of scripts/packages.txt to be here already."
    return 0
  }
  local wanted missing as_root=()
  wanted=$(awk -v marks=" $* " '!/^#/ && NF >= 2 && index(marks, " " $1 " ") {print $2}' scripts/packages.txt)
  missing=$(comm -23 <(sort -u <<<"$wanted") \
    <(dpkg-query -W -f='${db:Status-Status} ${Package}\n' 2>/dev/null | awk '$1 == "installed" {print $2}' | sort -u))
  [ -n "$missing" ] || return 0
  step "Installing $(wc -w <<<"$missing") Debian packages: $(tr '\n' ' ' <<<"$missing")"
  if [ "$(id -u)" != 0 ]; then
    command -v sudo >/dev/null 2>&1 ||
      die "these packages are missing, and installing them needs root or sudo:" $missing
    as_root=(sudo)
  fi
  local log=$BUILD/apt.log
  mkdir -p "$BUILD"
  # Two tries: a mirror may be busy.
  for try in 1 2; do
    if { "${as_root[@]}" apt-get -o Acquire::Retries=3 update -qq &&
      "${as_root[@]}" env DEBIAN_FRONTEND=noninteractive apt-get -o Acquire::Retries=3 -o Dpkg::Use-Pty=0 \
        install -y --no-install-recommends $missing; } </dev/null 2>&1 | tee "$log" |
      awk '/^Need to get|^After this operation/ {print "   " $0; fflush()}
           /^Unpacking/ && ++u % 100 == 0 {print "   " u " packages unpacked"; fflush()}
           /^Setting up/ && ++n % 100 == 0 {print "   " n " packages set up"; fflush()}'; then
      rm -f "$BUILD"/*/build.ninja  # what was not found before is looked for again
      return 0
    fi
    [ "$try" = 2 ] || say "   apt failed; once more"
  done
  tail -n 20 "$log" >&2
  die "apt could not install the packages; the whole story is in build/apt.log"
}

# configure PRESET [without-tests]: cmake, unless that was done.
configure() {
  local preset=$1 log=$BUILD/$1.configure.log cache=$BUILD/$1/CMakeCache.txt
  local tests=ON
  [ "${2-}" = without-tests ] && tests=OFF
  mkdir -p "$BUILD"
  # A build without tests is given them when they are wanted; one with tests keeps them.
  if [ -f "$BUILD/$preset/build.ninja" ] && { [ "$tests" = OFF ] || ! grep -q '^RUNBAND_TESTS:BOOL=OFF' "$cache"; }; then return 0; fi
  step "Configuring $preset"
  cmake --preset "$preset" -DRUNBAND_TESTS=$tests >"$log" 2>&1 </dev/null || { cat "$log" >&2; die "configuring failed"; }
}

# build PRESET [TARGET...]: ninja with one progress line every few seconds. A file's warnings are kept in
# build/PRESET/warnings/ until the file compiles without, so that an incremental build cannot hide them.
build() {
  local preset=$1 dir=$BUILD/$1 line last=$SECONDS name kept=$BUILD/$1/warnings
  shift
  mkdir -p "$kept"
  step "Building $preset"
  local begin=$SECONDS
  set +e
  ninja -C "$dir" "$@" </dev/null 2>&1 | while IFS= read -r line; do
    case $line in
      "ninja: Entering directory"* | "-- "*) ;;
      "["*"/"*"] "*)
        case $line in
          *" Building "*" object "*)
            name=${line##* object }
            name=$kept/${name//\//+}
            rm -f "$name"
            ;;
          *) name= ;;
        esac
        if [ $((SECONDS - last)) -ge 5 ]; then
          last=$SECONDS
          printf '   %s s  %s\n' $((SECONDS - begin)) "$line"
        fi
        ;;
      *)
        printf '%s\n' "$line"
        case $line in *"warning:"*) [ -n "${name:-}" ] && printf '%s\n' "$line" >>"$name" ;; esac
        ;;
    esac
  done
  local status=${PIPESTATUS[0]}
  set -e
  [ "$status" = 0 ] || die "the build of $preset failed"
  say "   built in $((SECONDS - begin)) s"
}
