//! The line editor, the commands and the batch commands.
