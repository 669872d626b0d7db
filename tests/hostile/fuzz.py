"""Feeds a reader with files grown from its corpus by coverage: `python -m tests.hostile.fuzz recipe --runs 60000`.

Needs atheris (extra `fuzz`): libFuzzer's engine over the branches of the reader, the TOML or JSON library
and ours. A mutation is the engine's own on bytes, or one that knows the text: a line moved, doubled or left out, a
word put in another's place, a key of the recipe given a hostile value. Faults go to --found, and the run goes on;
`--keep` packs what reached new branches into the corpus that `tests/hostile/test_readers.py` replays.
"""

from __future__ import annotations

import argparse
import ast
import random
import re
import subprocess
import sys
import tempfile
import time
import traceback
from collections.abc import Callable, Iterator
from pathlib import Path
from types import FrameType
from typing import Any

HERE = Path(__file__).parent
RECIPES = HERE.parents[1] / "recipes"
CORPUS = HERE / "corpus"
LONGEST = 4096  # of a kept or grown input
SLOW_S = 2.0  # of one processor
_TOKEN = re.compile(rb"[A-Za-z_][\w-]*|[-+]?[\d.]+(?:[eE][-+]?\d+)?|\"[^\"\n]*\"|[^\s\w]")
_HOSTILE = (
    b"1e400", b"-1", b"0", b"nan", b"inf", b"-inf", b"true", b"null", b"[]", b"{}", b"[[]]", b'""', b'"auto"', b'"AUTO "',
    b'"none"', b"9" * 30, b"9" * 400, b"0x7f", b"1_0", b"1979-05-27", b"07:32:00", b'"\\u0000"', b'"\\ud83d"',
    b'"\\u001b[31m"', b'"\xe2\x80\xae"', b'"1e9999 mm"', b'"0 mm"', b'"1e-9 mm"', b'"3000 mm"', b'"1/0 in"', b'"1 1/2 in"',
    b'"2.44 GHz"', b'"90 deg"', b'"13 AWG"', b'"20 gauge"', b'"=1+1"', b'"../x"', b"'", b'"', b"'''", b'"""', b"#", b"!",
    b"=", b".", b",", b"[", b"]", b"{", b"}", b"\r", b"\r\n", b"\x00", b"\xff", b"\xef\xbb\xbf", b"\x0c",
    b"[[radiator.trial]]", b"[[reflector.holes]]", b"[Version] 2.0", b"[Reference] 50", b"# Hz S MA R 75",
)  # fmt: skip


def seeds(kind: str) -> Iterator[bytes]:
    """What a run grows from: the kept corpus, good files, and the bombs that are short."""
    from tests.hostile.bombs import BOMBS
    from tests.recipe.bad_recipes import BAD

    yield from kept(kind)
    yield from (data for _, data in BOMBS[kind])
    if kind == "recipe":
        yield from (path.read_bytes() for path in sorted(RECIPES.glob("*.toml")))
        yield from (text if isinstance(text, bytes) else text.encode() for _, text, *_ in BAD)


def kept(kind: str) -> list[bytes]:
    """The corpus in the repository: one Python bytes literal a line."""
    path = CORPUS / f"{kind}.txt"
    if not path.exists():
        return []
    return [ast.literal_eval(line) for line in path.read_text(encoding="ascii").splitlines()]


def words(kind: str) -> list[bytes]:
    """Words a text mutation puts in: the reader's own, and hostile ones."""
    own: list[str] = []
    if kind == "recipe":
        from wavejig.recipe.models import Recipe

        own = sorted(
            set(re.findall(r'"([a-z][\w-]{1,30})"', str(Recipe.model_json_schema()).replace("'", '"')))
        )
    return [*_HOSTILE, *(w.encode() for w in own)]


def mutated(data: bytes, most: int, draw: random.Random, known: list[bytes]) -> bytes:
    """One change that keeps the look of the text."""
    lines = data.split(b"\n")
    at = draw.randrange(len(lines))
    way = draw.randrange(7)
    if way == 0:
        lines.insert(draw.randrange(len(lines) + 1), lines[at])
    elif way == 1 and len(lines) > 1:
        del lines[at]
    elif way == 2:
        lines.insert(at, draw.choice(known) + b" = " + draw.choice(known))
    elif way == 3:
        head, equals, _ = lines[at].partition(b"=")
        lines[at] = head + equals + b" " + draw.choice(known)
    else:
        tokens = list(_TOKEN.finditer(lines[at]))
        if tokens:
            token = draw.choice(tokens)
            word = draw.choice(known)
            if way == 4:  # a number a little or a lot off
                found = re.search(rb"\d+", token[0])
                factor = draw.choice((0, 1e-9, 0.1, 0.5, 0.99, 1.01, 2, 10, 1e9))
                if found:
                    word = token[0].replace(found[0], b"%.6g" % (float(found[0][:9]) * factor), 1)
            lines[at] = lines[at][: token.start()] + word + lines[at][token.end() :]
    return b"\n".join(lines)[:most]


def main() -> int:
    """Grow, run, tell; 1 where a fault was found."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("kind", choices=("recipe", "sweep", "model"))
    parser.add_argument("--runs", type=int, default=60_000)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--found", type=Path, default=Path(tempfile.gettempdir()) / "wavejig-fuzz")
    parser.add_argument("--keep", action="store_true", help="pack what reached new branches into the corpus")
    parser.add_argument("--child", type=Path, help=argparse.SUPPRESS)
    args, _ = parser.parse_known_args()
    if args.child:
        return _child(args)
    grown = args.found / f"{args.kind}-grown"
    grown.mkdir(parents=True, exist_ok=True)
    for i, data in enumerate(d for d in seeds(args.kind) if len(d) <= LONGEST):
        (grown / f"seed-{i:04}").write_bytes(data)
    began = time.monotonic()
    ended = _run(args, grown, f"-runs={args.runs}", f"-seed={args.seed}")
    print(f"{args.kind}: {args.runs} inputs in {time.monotonic() - began:.0f} s; faults:")
    faults = sorted((args.found / args.kind).glob("*.txt"))
    for path in faults:
        print(f"  {path}: {path.read_text(encoding='utf-8').splitlines()[-1]}")
    if args.keep:
        inputs = sorted({p.read_bytes() for p in grown.iterdir()}, key=lambda d: (len(d), d))
        chosen = least(args.kind, inputs)
        text = "".join(f"{data!r}\n" for data in chosen)
        (CORPUS / f"{args.kind}.txt").write_text(text, encoding="ascii")
        print(f"{len(chosen)} of {len(inputs)} inputs kept, {len(text) / 1e3:.0f} kB")
    return 1 if faults or ended else 0


def least(kind: str, inputs: list[bytes]) -> list[bytes]:
    """Those that reach a step from one line to another which none before them reached; in their order."""
    from tests.hostile.readers import READERS

    name, reader = READERS[kind]
    chosen, seen = [], set[tuple[str, int, int]]()
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / name
        for data in inputs:
            path.write_bytes(data)
            told, steps = _steps(lambda: reader(path))
            steps |= {(re.sub(r"\d+|\"[^\"]*\"", "", row), 0, 0) for row in told.splitlines()}
            if steps - seen:
                seen |= steps
                chosen.append(data)
    return chosen


def _steps(run: Callable[[], str]) -> tuple[str, set[tuple[str, int, int]]]:
    """What it said, and pairs of lines that followed each other, in our code and the TOML library's."""
    steps: set[tuple[str, int, int]] = set()

    def look(frame: FrameType, event: str, _: object) -> Any:
        code = frame.f_code
        if "wavejig" not in code.co_filename and "tomllib" not in code.co_filename:
            return None
        before = code.co_firstlineno

        def line(frame: FrameType, event: str, _: object) -> Any:
            nonlocal before
            steps.add((code.co_filename, before, frame.f_lineno))
            before = frame.f_lineno
            return line

        return line

    sys.settrace(look)
    try:
        told = run()
    finally:
        sys.settrace(None)
    return told, steps


def _run(args: argparse.Namespace, folder: Path, *options: str) -> int:
    command = [
        sys.executable,
        "-m",
        "tests.hostile.fuzz",
        args.kind,
        "--found",
        str(args.found / args.kind),
        "--child",
    ]
    engine = [str(folder), f"-max_len={LONGEST}", "-timeout=60", "-rss_limit_mb=1500", *options]
    return subprocess.run([*command, str(folder), *engine], cwd=HERE.parents[1], check=False).returncode


def _child(args: argparse.Namespace) -> int:
    import atheris

    with atheris.instrument_imports(include=["wavejig", "tomllib", "skrf"]):
        # named here, since the readers import them only when they are called
        import skrf.io.touchstone  # noqa: F401

        import wavejig.field.modelfile  # noqa: F401
        from tests.hostile.readers import READERS
    args.found.mkdir(parents=True, exist_ok=True)
    name, reader = READERS[args.kind]
    path = Path(tempfile.mkdtemp(dir="/dev/shm" if Path("/dev/shm").is_dir() else None)) / name
    known = words(args.kind)

    def one(data: bytes) -> None:
        path.write_bytes(data)
        _guarded(lambda: reader(path), data, args.found)

    def mutate(data: bytes, most: int, seed: int) -> bytes:
        draw = random.Random(seed)
        out = data
        for _ in range(draw.choice((1, 1, 2, 4))):
            out = mutated(out, most, draw, known) if draw.random() < 0.8 else atheris.Mutate(out, most)
        return out

    options = sys.argv[sys.argv.index("--child") + 2 :]
    atheris.Setup([sys.argv[0], *options], one, custom_mutator=mutate)
    atheris.Fuzz()
    return 0


def _guarded(run: Callable[[], str], data: bytes, found: Path) -> None:
    """Run once; a fault is written down, one for each place it comes from."""
    began = time.process_time()
    try:
        run()
        took = time.process_time() - began
        if took < SLOW_S:
            return
        what, where = f"took {took:.1f} s", "slow"
    except Exception as err:
        what = traceback.format_exc()
        last = traceback.extract_tb(err.__traceback__)[-1]
        where = f"{type(err).__name__}-{Path(last.filename).stem}-{last.lineno}"
    if not (found / f"{where}.txt").exists():
        (found / f"{where}.bin").write_bytes(data)
        (found / f"{where}.txt").write_text(what, encoding="utf-8")


if __name__ == "__main__":
    sys.exit(main())
