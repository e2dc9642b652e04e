"""What was done and read on site: read it, judge it, freeze it, file it once; open items and history."""
