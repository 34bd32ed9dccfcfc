//! What the window tests share.
