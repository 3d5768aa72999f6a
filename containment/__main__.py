"""Run the command line as ``python -m containment``."""

from containment.faces.command import main

if __name__ == "__main__":
    raise SystemExit(main())
