//! Drawing-free descriptions of pictures, drawn alike on screen and in files.
