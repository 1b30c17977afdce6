"""What people and machines read: the same judgements in several forms."""
