"""The rules that come with the tool, one file a family."""
