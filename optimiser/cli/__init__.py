"""Room 11: the commands, one file each. They parse, call, and print; nothing below them prints."""
