"""Room 8: runs on disk, so that nothing finished is ever lost."""
