"""Speed and size against two general typesetters, on the same content: `python -m tests.bench [--quick]`."""
