//! Writes the file in a thread of its own, so that compression does not hold up the model.
//!
//! Records pass in order through a channel that holds a few; the bytes written are the same as
//! without the thread. An error of the writer reaches the model at the next record.

use crate::model::observer::Restart;
use crate::output::OutputError;
use crate::output::writer::RunWriter;
use crate::series::Record;
use std::path::PathBuf;
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

/// A writer in a thread of its own. Only when told that the run is complete does it touch the
/// output; a run that fails leaves its segments and the output as it was.
pub struct Background {
    messages: SyncSender<Message>,
    writer: JoinHandle<Result<Option<PathBuf>, OutputError>>,
}

impl Background {
    fn new(mut writer: RunWriter) -> Self {
        let (messages, incoming) = sync_channel(WAITING);
        let writer = std::thread::spawn(move || {
            for message in incoming {
                match message {
                    Message::Record(both) => writer.push(&both.0, &both.1.0)?,
                    Message::Complete => return writer.finish().map(Some),
                }
            }
            Ok(None)
        });
        Self { messages, writer }
    }

    /// Waits for the thread and returns what it ended with: the path of a completed file.
    fn join(self) -> Result<Option<PathBuf>, OutputError> {
        drop(self.messages);
        self.writer
            .join()
            .unwrap_or_else(|panic| std::panic::resume_unwind(panic))
    }
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

    /// Hands over one record. When a background writer has stopped, [`Sink::give_up`] tells why.
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

    /// Completes the file.
    ///
    /// # Errors
    /// When it could not be written.
    pub fn finish(self) -> Result<Option<PathBuf>, OutputError> {
        match self {
            Self::Direct(writer) => writer.finish().map(Some),
            Self::Background(thread) => {
                // A writer that is gone gives its own error below.
                let _ = thread.messages.send(Message::Complete);
                thread.join()
            }
        }
    }

    /// Gives up: what is in segments stays, the output is left as it was.
    ///
    /// # Errors
    /// When a record handed over before could not be written.
    pub fn give_up(self) -> Result<(), OutputError> {
        match self {
            Self::Direct(_) => Ok(()),
            Self::Background(thread) => thread.join().map(|_| ()),
        }
    }
}

/// What became of a record.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Delivery {
    /// It is written or will be.
    Taken,
    /// The writer has stopped; [`Sink::give_up`] gives its error.
    WriterGone,
}
