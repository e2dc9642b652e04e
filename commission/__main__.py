"""`python -m commission` is the same as the console command `commission`."""

from commission.cli import main

if __name__ == "__main__":
    main()
