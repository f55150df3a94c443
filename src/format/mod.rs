//! One file per output format, each writing to a [`std::io::Write`].
