//! The text of a theory, line by line.

/// A line of the document; ids are never reused.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct LineId(pub u32);

/// A statement with all the physical lines that it takes, or lines that state nothing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Line {
    /// Its id.
    pub id: LineId,
    /// The text word for word, the end of the line included.
    pub text: String,
}

/// The lines of a theory in order; put together they are the file, byte for byte.
#[derive(Clone, Debug, Default)]
pub struct Document {
    lines: Vec<Line>,
    next: u32,
}

impl Document {
    /// The lines in order.
    pub fn lines(&self) -> &[Line] {
        &self.lines
    }

    /// The id that the next line will have.
    pub fn next_id(&self) -> LineId {
        LineId(self.next)
    }

    /// The line with this id.
    pub fn line(&self, id: LineId) -> Option<&Line> {
        self.lines.iter().find(|line| line.id == id)
    }

    /// The number of the first physical line of this one, from 1.
    pub fn number(&self, id: LineId) -> Option<usize> {
        let place = self.lines.iter().position(|line| line.id == id)?;
        let ends = |line: &Line| line.text.bytes().filter(|byte| *byte == b'\n').count();
        Some(1 + self.lines[..place].iter().map(ends).sum::<usize>())
    }

    /// The whole text.
    pub fn text(&self) -> String {
        self.lines.iter().map(|line| line.text.as_str()).collect()
    }

    /// Appends text word for word, as it was read from a file.
    pub fn push(&mut self, text: &str) -> LineId {
        let id = LineId(self.next);
        self.next += 1;
        self.lines.push(Line {
            id,
            text: text.to_owned(),
        });
        id
    }

    /// Puts a new line in, before `before` or at the end, with line ends as the document has them.
    pub fn insert(&mut self, text: &str, before: Option<LineId>) -> LineId {
        self.insert_all([text], before)[0]
    }

    /// Puts new lines in, before `before` or at the end, with line ends as the document has them.
    pub fn insert_all<'l>(
        &mut self,
        texts: impl IntoIterator<Item = &'l str>,
        before: Option<LineId>,
    ) -> Vec<LineId> {
        let end = self.line_end();
        let place = before
            .and_then(|id| self.lines.iter().position(|line| line.id == id))
            .unwrap_or(self.lines.len());
        if let Some(last) = place.checked_sub(1).map(|last| &mut self.lines[last])
            && !last.text.ends_with('\n')
        {
            last.text.push_str(end);
        }
        let first = self.next;
        let made: Vec<Line> = texts
            .into_iter()
            .zip(first..)
            .map(|(text, id)| Line {
                id: LineId(id),
                text: format!("{}{end}", text.trim_end_matches(['\r', '\n'])),
            })
            .collect();
        self.next += made.len() as u32;
        let ids = made.iter().map(|line| line.id).collect();
        self.lines.splice(place..place, made);
        ids
    }

    /// Changes the text of a line, keeping its end.
    pub fn replace(&mut self, id: LineId, text: &str) {
        if let Some(line) = self.lines.iter_mut().find(|line| line.id == id) {
            let end = match line.text.as_bytes() {
                [.., b'\r', b'\n'] => "\r\n",
                [.., b'\n'] => "\n",
                _ => "",
            };
            line.text = format!("{text}{end}");
        }
    }

    /// Takes a line out.
    pub fn remove(&mut self, id: LineId) {
        self.lines.retain(|line| line.id != id);
    }

    /// Takes out all lines for which `keep` is false.
    pub fn retain(&mut self, keep: impl Fn(LineId) -> bool) {
        self.lines.retain(|line| keep(line.id));
    }

    fn line_end(&self) -> &'static str {
        match self.lines.first() {
            Some(line) if line.text.contains("\r\n") => "\r\n",
            _ => "\n",
        }
    }
}
