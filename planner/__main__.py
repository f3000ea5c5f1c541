"""``python -m planner`` is the command ``fridgeweek``."""

from planner.cli import main

if __name__ == "__main__":
    main()
