"""What each command does: options in, text and exit code out. Nothing here prints."""
