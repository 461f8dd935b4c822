//! What the tests against published data share.
