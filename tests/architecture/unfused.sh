#!/usr/bin/env bash
# Fails when a library or object file holds a fused multiply-add.
#
# The compiler fuses a*b+c unless told not to, the results then depend on the CPU, and label
# maps hardly show it; so the machine code itself is read.
# Usage: unfused.sh OBJDUMP FILE    exit 0 clean, 1 fused, 2 cannot tell, 77 not x86-64
set -euo pipefail

listing="$("$1" -d --no-show-raw-insn "$2" 2>/dev/null)" || {
  printf 'unfused.sh: %s cannot read %s\n' "$1" "$2" >&2
  exit 2
}
grep -q 'elf64-x86-64' <<<"$listing" || {
  printf 'unfused.sh: %s is not for x86-64: skipped\n' "$2"
  exit 77
}
instructions="$(grep -cE '^ +[0-9a-f]+:' <<<"$listing" || true)"
[[ $instructions -gt 0 ]] || {
  printf 'unfused.sh: %s holds no instructions\n' "$2" >&2
  exit 2
}
fused="$(grep -E '[[:space:]]vf(n?m(add|sub)|maddsub|msubadd)[0-9a-z]*' <<<"$listing" || true)"
if [[ -n $fused ]]; then
  printf '%s holds fused multiply-adds, for instance:\n' "$2"
  head -n 5 <<<"$fused"
  exit 1
fi
printf '%s: %s instructions, none fused\n' "$2" "$instructions"
