//! A buffered, counting, little-endian writer.

use std::io::{self, Write};

/// Gathers small pieces, so that the writer below is called once in a while
/// only, and counts the bytes.
pub(super) struct Sink<'a> {
    out: &'a mut dyn Write,
    buffer: Vec<u8>,
    passed: u64,
}

impl<'a> Sink<'a> {
    const CAPACITY: usize = 1 << 16;

    pub(super) fn new(out: &'a mut dyn Write) -> Self {
        Self {
            out,
            buffer: Vec::with_capacity(Self::CAPACITY),
            passed: 0,
        }
    }

    /// Appends some bytes.
    pub(super) fn put(&mut self, bytes: &[u8]) -> io::Result<()> {
        if self.buffer.len() + bytes.len() > Self::CAPACITY {
            self.pass()?;
        }
        self.buffer.extend_from_slice(bytes);
        Ok(())
    }

    /// Appends singles.
    pub(super) fn singles(&mut self, values: [f32; 3]) -> io::Result<()> {
        let mut bytes = [0; 12];
        for (four, value) in bytes.chunks_exact_mut(4).zip(values) {
            four.copy_from_slice(&value.to_le_bytes());
        }
        self.put(&bytes)
    }

    /// Appends doubles.
    pub(super) fn doubles(&mut self, values: [f64; 3]) -> io::Result<()> {
        let mut bytes = [0; 24];
        for (eight, value) in bytes.chunks_exact_mut(8).zip(values) {
            eight.copy_from_slice(&value.to_le_bytes());
        }
        self.put(&bytes)
    }

    /// Passes on what is left, and returns the number of bytes in all.
    pub(super) fn finish(mut self) -> io::Result<u64> {
        self.pass()?;
        Ok(self.passed)
    }

    fn pass(&mut self) -> io::Result<()> {
        self.out.write_all(&self.buffer)?;
        self.passed += self.buffer.len() as u64;
        self.buffer.clear();
        Ok(())
    }
}

impl Write for Sink<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.put(bytes)?;
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        self.pass()?;
        self.out.flush()
    }
}
