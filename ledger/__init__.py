"""wingledger: a build-traceable wing weight and fuel volume ledger."""

__version__ = "0.1.0"
