# Sourced by run and slow: steps with their seconds, and a count at the end.
# A step that fails does not keep the later ones from running.

passed=0
failed=()

# step NAME COMMAND...: runs a command or function in a shell of its own. The
# processor's seconds, all cores added, say what a busy machine hides.
step() {
	local name=$1 status
	shift
	printf '\n== %s\n' "$name"
	local TIMEFORMAT="-- $name: %0R s, %0U + %0S s of processor"
	set +e
	{ time (set -e; "$@" </dev/null) 2>&1; } 2>&1
	status=$?
	set -e
	if [ "$status" -eq 0 ]; then
		passed=$((passed + 1))
	else
		failed+=("$name")
		printf -- '-- %s: FAILED with %d\n' "$name" "$status"
	fi
}

# finish prints the total and ends the script.
finish() {
	local name
	printf '\nTotal: %d s\n' "$SECONDS"
	for name in "${failed[@]}"; do
		printf 'failed: %s\n' "$name"
	done
	printf '%d passed, %d failed\n' "$passed" "${#failed[@]}"
	[ "${#failed[@]}" -eq 0 ]
}

# debian PROGRAM=PACKAGE...: installs the packages whose program is missing.
debian() {
	local pair missing=()
	for pair in "$@"; do
		command -v "${pair%%=*}" >/dev/null || missing+=("${pair#*=}")
	done
	if [ "${#missing[@]}" -eq 0 ]; then
		echo "all there"
		return
	fi
	export DEBIAN_FRONTEND=noninteractive
	apt-get -qq update
	apt-get -qq install -y --no-install-recommends "${missing[@]}"
}

# fuzz SECONDS: every Fuzz function of the module, one after the other.
fuzz() {
	local package name n=0 targets
	targets=$(go test -list '^Fuzz' ./... | awk '
		/^Fuzz/ { name[n++] = $1 }
		/^ok/ { for (i = 0; i < n; i++) print $2, name[i]; n = 0 }')
	while read -r package name; do
		[ -n "$name" ] || continue
		go test -run '^$' -fuzz "^$name\$" -fuzztime "${1}s" "$package"
		n=$((n + 1))
	done <<<"$targets"
	echo "$n fuzz functions, $1 s each"
	[ "$n" -gt 0 ]
}
