"""Regenerate the sample cases, or with --extra DIR the further wells kept for tuning."""

from __future__ import annotations

import argparse
import sys
import time
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path.insert(0, str(HERE))

from simulator.build import build  # noqa: E402


def main(argv: list[str] | None = None) -> int:
    """Build every well whose settings stand beside this file."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--extra", type=Path, help="build the further wells into this folder instead")
    parser.add_argument("--only", nargs="*", help="names of the wells to build")
    args = parser.parse_args(argv)
    source = HERE / "settings" / "extra" if args.extra else HERE / "settings"
    target = args.extra or HERE
    for path in sorted(source.glob("*.toml")):
        if args.only and path.stem not in args.only:
            continue
        begin = time.perf_counter()
        facts = build(path, target / path.stem)
        print(f"{path.stem}: {time.perf_counter() - begin:.1f} s, peak ratio {facts['peak_load_ratio']:.2f}")
    return 0


if __name__ == "__main__":
    raise SystemExit(main())
