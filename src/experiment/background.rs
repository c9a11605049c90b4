//! Writes the file in a thread of its own, so that compression does not hold up the model.
//!
//! Records pass in order through a channel that holds a few; the bytes written are the same as
//! without the thread. An error of the writer reaches the model at the next record.

use crate::model::observer::Restart;
use crate::output::OutputError;
use crate::output::writer::RunWriter;
use crate::series::Record;
use std::path::PathBuf;
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::mpsc::{SyncSender, sync_channel};
use std::thread::JoinHandle;

/// Records that may wait; a record is some ten kilobytes.
const WAITING: usize = 16;

/// Where records go.
pub enum Sink {
    /// Written by the caller's thread.
    Direct(Box<RunWriter>),
    /// Written by a thread of its own.
    Background(Background),
}

/// What the writer's thread is told.
enum Message {
    /// One more record, and the state behind it.
    Record(Box<(Record, Restart)>),
    /// The run is complete: merge the segments into the file.
    Complete,
}

/// What a writer leaves on disk.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Left {
    /// The complete file.
    File(PathBuf),
    /// So many records in segments; the output is as it was.
    Records(usize),
}

/// A writer in a thread of its own. Only when told that the run is complete does it touch the
/// output; a run that fails leaves its segments and the output as it was.
pub struct Background {
    messages: SyncSender<Message>,
    segments: Arc<AtomicUsize>,
    writer: JoinHandle<Result<Left, OutputError>>,
}

impl Background {
    fn new(mut writer: RunWriter) -> Self {
        let (messages, incoming) = sync_channel(WAITING);
        let segments = Arc::new(AtomicUsize::new(writer.segments()));
        let count = Arc::clone(&segments);
        let writer = std::thread::spawn(move || {
            for message in incoming {
                match message {
                    Message::Record(both) => {
                        writer.push(&both.0, &both.1.0)?;
                        count.store(writer.segments(), Ordering::Relaxed);
                    }
                    Message::Complete => return writer.finish().map(Left::File),
                }
            }
            keep(writer)
        });
        Self {
            messages,
            segments,
            writer,
        }
    }

    /// Waits for the thread and returns what it left.
    fn join(self) -> Result<Left, OutputError> {
        drop(self.messages);
        self.writer
            .join()
            .unwrap_or_else(|panic| std::panic::resume_unwind(panic))
    }
}

fn keep(mut writer: RunWriter) -> Result<Left, OutputError> {
    writer.save()?;
    Ok(Left::Records(writer.records()))
}

impl Sink {
    /// A sink on its own thread when two threads or more may be used.
    pub fn new(writer: RunWriter, threads: usize) -> Self {
        if threads >= 2 {
            Self::Background(Background::new(writer))
        } else {
            Self::Direct(Box::new(writer))
        }
    }

    /// Hands over one record. When a background writer has stopped, [`Sink::keep`] tells why.
    ///
    /// # Errors
    /// When a direct writer fails.
    pub fn push(&mut self, record: &Record, restart: Restart) -> Result<Delivery, OutputError> {
        match self {
            Self::Direct(writer) => writer.push(record, &restart.0).map(|()| Delivery::Taken),
            Self::Background(thread) => Ok(
                match thread
                    .messages
                    .send(Message::Record(Box::new((record.clone(), restart))))
                {
                    Ok(()) => Delivery::Taken,
                    Err(_) => Delivery::WriterGone,
                },
            ),
        }
    }

    /// Segments on disk so far.
    pub fn segments(&self) -> usize {
        match self {
            Self::Direct(writer) => writer.segments(),
            Self::Background(thread) => thread.segments.load(Ordering::Relaxed),
        }
    }

    /// Completes the file.
    ///
    /// # Errors
    /// When it could not be written.
    pub fn finish(self) -> Result<Left, OutputError> {
        match self {
            Self::Direct(writer) => writer.finish().map(Left::File),
            Self::Background(thread) => {
                // A writer that is gone gives its own error below.
                let _ = thread.messages.send(Message::Complete);
                thread.join()
            }
        }
    }

    /// Ends without the file: all complete records are put into segments.
    ///
    /// # Errors
    /// When they cannot be written.
    pub fn keep(self) -> Result<Left, OutputError> {
        match self {
            Self::Direct(writer) => keep(*writer),
            Self::Background(thread) => thread.join(),
        }
    }
}

/// What became of a record.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Delivery {
    /// It is written or will be.
    Taken,
    /// The writer has stopped; [`Sink::keep`] gives its error.
    WriterGone,
}
