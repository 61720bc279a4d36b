"""What stands in a made text for a line of another program's that is no record: a comment, or a mark and a reason."""

MARK = "!"
PASSED_OVER = "#"
