"""``python -m planner`` is the command ``fridgeweek``."""

from planner.entry import main

if __name__ == "__main__":
    main()
