"""The version of the tool, in the one place from which everything takes it."""

VERSION = "0.1.0"
