"""Outside checks that anyone can run: `goniosim verify` and tests/authorities read the same lists.

`check.py` is what a check is; `checks/` holds them, one subject a file, each check beside its source.
"""
