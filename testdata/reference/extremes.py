"""Deep ripple, long and short time constants, ladders, several supplies, switched sources."""
