#!/usr/bin/env bash
# Builds sdist and wheel, installs each in an environment of its own and runs the tests on what is installed,
# nothing of the checkout's parts/ being on the path. Says what an installation weighs.
#
#   bash tests/bench/wheel.sh                       the wheel, all default tests, this python3
#   bash tests/bench/wheel.sh python3.11 python3.13 with each of these
#   SAMPLE=1 bash tests/bench/wheel.sh              a sample of the tests
#   WITH=.venv bash tests/bench/wheel.sh            the same with that environment's libraries: quick, as in the gate
set -euo pipefail
top=$(cd "$(dirname "$0")/../.." && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
pythons=("${@:-python3}")
builder=${BUILDER:-${WITH:+$WITH/bin/}python3}
WITH=${WITH:+$(cd "$WITH" && pwd)}

cp -r "$top" "$work/source" && rm -rf "$work/source/out" "$work/source/.venv" "$work/source/build"
(cd "$work/source" && "$builder" -m build -q --outdir "$work/dist" .)
ls -l "$work/dist" | awk 'NR > 1 {printf "%s %.1f MB\n", $9, $5 / 1e6}'
if "$builder" -m zipfile -l "$work"/dist/*.whl | grep -q -e tests/ -e recipes/; then
  echo "the wheel holds tests or recipes" >&2
  exit 1
fi

for python in "${pythons[@]}"; do
  room="$work/room"
  rm -rf "$room" && mkdir "$room"
  "$python" -m venv "$room/plain"
  site=$(echo "$room"/plain/lib/python*/site-packages)
  if [[ -n ${WITH:-} ]]; then
    echo "$WITH"/lib/python*/site-packages > "$site/libraries.pth" # its own .pth files, so its wavejig, do not count
    "$room/plain/bin/pip" install -q --no-deps "$work"/dist/*.whl
  else
    start=$SECONDS
    "$room/plain/bin/pip" install -q "$work"/dist/*.whl
    echo "$("$python" --version): plain installation $((SECONDS - start)) s, $(du -sm "$room/plain" | cut -f1) MB; heaviest:"
    du -sm "$site"/* | sort -rn | head -4 | awk '{n = split($2, p, "/"); printf "  %s %s MB\n", p[n], $1}'
  fi
  # the main job with nothing but what it pulls in
  (cd "$room" && plain/bin/wavejig new first.toml && plain/bin/wavejig check first.toml >/dev/null)
  "$python" -m venv "$room/sdist"
  "$room/sdist/bin/pip" install -q --no-deps "$work"/dist/*.tar.gz
  diff -r -x __pycache__ "$room"/sdist/lib/python*/site-packages/wavejig "$site/wavejig"
  echo "sdist and wheel install the same files"
  [[ -n ${WITH:-} ]] || "$room/plain/bin/pip" install -q "wavejig[dev] @ file://$(echo "$work"/dist/*.whl)"
  cp -r "$top/tests" "$top/recipes" "$top/README.md" "$top/DEVELOPERS.md" "$top/pyproject.toml" "$room"
  cd "$room"
  if [[ -n ${SAMPLE:-}${WITH:-} ]]; then
    plain/bin/python -m pytest -q tests/test_cli.py tests/commands tests/stock tests/forming tests/test_guide.py
  else
    plain/bin/python -m pytest -q -n 2
  fi
  plain/bin/python -c "import wavejig, sys; sys.exit('plain' not in wavejig.__file__)"
  cd "$top"
done
