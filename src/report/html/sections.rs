//! From the events of the Markdown to sections, lists of facts, tables and the curve.

use std::fmt::Write;

use pulldown_cmark::{CowStr, Event, HeadingLevel, LinkType, Options, Parser, Tag, TagEnd};

use crate::record::Record;
use crate::report::curve::{self, Layout};
use crate::report::escape::is_harmless;
use crate::report::page::status_word;

use super::text;

/// The laid-out body and the list of contents.
pub struct Body {
    /// The sections.
    pub html: String,
    /// The entries of the list of contents.
    pub contents: String,
}

/// Lays the Markdown of a report out as HTML.
pub fn body_of(markdown: &str, record: &Record) -> Body {
    let mut sections = Sections::new(record);
    for event in Parser::new_ext(markdown, Options::ENABLE_TABLES) {
        sections.take(event);
    }
    sections.finish()
}

/// Turns the events of the Markdown into sections, fact lists and tables with headings for every cell.
struct Sections<'a> {
    record: &'a Record,
    events: Vec<Event<'a>>,
    contents: String,
    /// Depth of block quotations: within one, the author speaks.
    quoted: u32,
    in_section: bool,
    heading: Option<String>,
    last_heading: String,
    list: Vec<ListKind>,
    label: Label,
    table: Table,
    links: Vec<bool>,
    curve_next: bool,
    in_file: bool,
}

#[derive(Clone, Copy, PartialEq)]
enum ListKind {
    Undecided(Option<u64>),
    Facts,
    Plain(Option<u64>),
}

#[derive(PartialEq)]
enum Label {
    None,
    Reading,
}

#[derive(Default)]
struct Table {
    headings: Vec<String>,
    /// Where the opening of the row stands among the events.
    row: usize,
    words: String,
    in_head: bool,
    column: usize,
}

impl<'a> Sections<'a> {
    fn new(record: &'a Record) -> Self {
        Self {
            record,
            events: Vec::new(),
            contents: String::new(),
            quoted: 0,
            in_section: false,
            heading: None,
            last_heading: String::new(),
            list: Vec::new(),
            label: Label::None,
            table: Table::default(),
            links: Vec::new(),
            curve_next: false,
            in_file: false,
        }
    }

    fn raw(&mut self, html: impl Into<CowStr<'a>>) {
        self.events.push(Event::InlineHtml(html.into()));
    }

    fn take(&mut self, event: Event<'a>) {
        self.decide_list(&event);
        match event {
            Event::Html(raw) | Event::InlineHtml(raw) => self.words(raw),
            Event::Text(words) => self.words(words),
            Event::Code(words) => {
                if let Some(heading) = &mut self.heading {
                    heading.push_str(&words);
                }
                self.events.push(Event::Code(words));
            }
            Event::Start(tag) => self.start(tag),
            Event::End(tag) => self.end(tag),
            other => self.events.push(other),
        }
    }

    fn words(&mut self, words: CowStr<'a>) {
        if let Some(heading) = &mut self.heading {
            heading.push_str(&words);
        }
        if self.table.in_head
            && let Some(last) = self.table.headings.last_mut()
        {
            last.push_str(&words);
        }
        self.table.words.push_str(&words);
        if self.in_file {
            self.events.push(Event::Text(words));
        } else if self.label == Label::Reading {
            let label = words.strip_suffix(':').unwrap_or(&words).to_owned();
            self.events.push(Event::Text(label.into()));
        } else {
            // A figure and its sign stay on one line.
            self.events
                .push(Event::Text(words.replace(" %", "\u{a0}%").into()));
        }
    }

    /// A list whose first item begins with a bold label is a list of facts.
    fn decide_list(&mut self, event: &Event<'a>) {
        let Some(ListKind::Undecided(start)) = self.list.last().copied() else {
            return;
        };
        match event {
            Event::Start(Tag::Item) => {}
            Event::Start(Tag::Strong) if self.quoted == 0 && start.is_none() => {
                self.set_list(ListKind::Facts);
                self.raw("<dl class=\"facts\">\n");
                self.raw("<div>");
            }
            _ => {
                self.set_list(ListKind::Plain(start));
                self.events.push(Event::Start(Tag::List(start)));
                self.events.push(Event::Start(Tag::Item));
            }
        }
    }

    fn set_list(&mut self, kind: ListKind) {
        if let Some(last) = self.list.last_mut() {
            *last = kind;
        }
    }

    fn start(&mut self, tag: Tag<'a>) {
        match tag {
            Tag::HtmlBlock => self.events.push(Event::Start(Tag::Paragraph)),
            Tag::Heading { level, .. } => self.start_heading(level),
            Tag::BlockQuote(kind) => {
                self.quoted += 1;
                self.events.push(Event::Start(Tag::BlockQuote(kind)));
            }
            Tag::List(start) => self.list.push(ListKind::Undecided(start)),
            Tag::Item => match self.list.last() {
                Some(ListKind::Undecided(_)) => {}
                Some(ListKind::Facts) => self.raw("<div>"),
                _ => self.events.push(Event::Start(Tag::Item)),
            },
            Tag::Strong if self.begins_item() => {
                self.label = Label::Reading;
                self.raw("<dt>");
            }
            Tag::Link {
                link_type,
                ref dest_url,
                ..
            } => {
                let kept = is_harmless(dest_url) || link_type == LinkType::Email;
                self.links.push(kept);
                if kept {
                    self.events.push(Event::Start(tag));
                }
            }
            Tag::Image { .. } => {}
            Tag::CodeBlock(kind) => {
                self.in_file = true;
                self.raw("<div class=\"scroll\" tabindex=\"0\" role=\"region\" aria-label=\"Text of a file\">");
                self.events.push(Event::Start(Tag::CodeBlock(kind)));
            }
            Tag::Table(_) => self.start_table(),
            Tag::TableHead => {
                self.table.in_head = true;
                self.raw("<thead><tr>");
            }
            Tag::TableRow => {
                self.table.column = 0;
                self.table.row = self.events.len();
                self.raw("<tr>");
            }
            Tag::TableCell => self.start_cell(),
            other => self.events.push(Event::Start(other)),
        }
    }

    /// Whether the next words are the label of a fact: just after the opening of its item.
    fn begins_item(&self) -> bool {
        self.list.last() == Some(&ListKind::Facts)
            && matches!(self.events.last(), Some(Event::InlineHtml(raw)) if &**raw == "<div>")
    }

    fn end(&mut self, tag: TagEnd) {
        match tag {
            TagEnd::HtmlBlock => self.events.push(Event::End(TagEnd::Paragraph)),
            TagEnd::Heading(level) => self.end_heading(level),
            TagEnd::BlockQuote(kind) => {
                self.quoted -= 1;
                self.events.push(Event::End(TagEnd::BlockQuote(kind)));
            }
            TagEnd::List(ordered) => match self.list.pop() {
                Some(ListKind::Facts) => self.raw("</dl>\n"),
                _ => self.events.push(Event::End(TagEnd::List(ordered))),
            },
            TagEnd::Item => match self.list.last() {
                Some(ListKind::Facts) => self.raw("</dd></div>\n"),
                _ => self.events.push(Event::End(TagEnd::Item)),
            },
            TagEnd::Strong if self.label == Label::Reading => {
                self.label = Label::None;
                self.raw("</dt><dd>");
            }
            TagEnd::Link => {
                if self.links.pop() == Some(true) {
                    self.events.push(Event::End(TagEnd::Link));
                }
            }
            TagEnd::Image => {}
            TagEnd::CodeBlock => {
                self.in_file = false;
                self.events.push(Event::End(TagEnd::CodeBlock));
                self.raw("</div>\n");
            }
            TagEnd::Table => self.raw("</tbody></table></div>\n"),
            TagEnd::TableHead => {
                self.table.in_head = false;
                self.raw("</tr></thead><tbody>\n");
            }
            TagEnd::TableRow => self.raw("</tr>\n"),
            TagEnd::TableCell => self.end_cell(),
            TagEnd::Paragraph if self.curve_next && self.quoted == 0 => {
                // The sentence that refers to this edition makes room for the curve itself.
                while let Some(event) = self.events.pop() {
                    if event == Event::Start(Tag::Paragraph) {
                        break;
                    }
                }
                self.draw_curve();
            }
            other => self.events.push(Event::End(other)),
        }
    }

    fn start_heading(&mut self, level: HeadingLevel) {
        if self.quoted > 0 {
            // A heading of the author must not enter the outline of the report.
            self.raw("<p><strong>");
            return;
        }
        if level == HeadingLevel::H2 {
            self.close_section();
        }
        self.heading = Some(String::new());
        // The heading is written when its words are known; until then they are collected.
        self.events.push(Event::InlineHtml("".into()));
    }

    fn end_heading(&mut self, level: HeadingLevel) {
        if self.quoted > 0 {
            self.raw("</strong></p>\n");
            return;
        }
        let words = self.heading.take().unwrap_or_default();
        // What was pushed since the empty mark is the text of the heading; it is written again with its identifier.
        while let Some(event) = self.events.pop() {
            if matches!(&event, Event::InlineHtml(raw) if raw.is_empty()) {
                break;
            }
        }
        match level {
            HeadingLevel::H1 => self.raw(format!("<h1>{}</h1>\n", text(&words))),
            HeadingLevel::H2 => self.open_section(&words),
            _ => self.raw(format!("<h3>{}</h3>\n", text(&words))),
        }
        self.curve_next = level == HeadingLevel::H3 && words == "Curve";
        self.last_heading = words;
    }

    fn open_section(&mut self, words: &str) {
        let caution = words.starts_with("Caution: ");
        let slug = if caution {
            "caution".to_owned()
        } else {
            slug(words)
        };
        self.in_section = true;
        self.raw(format!(
            "<section class=\"{slug}\" aria-labelledby=\"{slug}\">\n<h2 id=\"{slug}\">{}</h2>\n",
            text(words)
        ));
        if slug == "on-one-page" {
            let word = status_word(self.record);
            let kind = if word == "Proved" { "holds" } else { "finding" };
            self.raw(format!("<p class=\"verdict {kind}\">{word}</p>\n"));
        }
        let shown = if caution { "Caution" } else { words };
        let _ = writeln!(
            self.contents,
            "<li><a href=\"#{slug}\">{}</a></li>",
            text(shown)
        );
    }

    fn close_section(&mut self) {
        if self.in_section {
            self.raw("</section>\n");
            self.in_section = false;
        }
    }

    fn draw_curve(&mut self) {
        self.curve_next = false;
        let wide = curve::within_page(self.record, Layout::Page);
        let narrow = curve::within_page(self.record, Layout::Phone);
        self.raw(format!(
            "<figure>\n<div class=\"wide\">{wide}</div>\n<div class=\"narrow\">{narrow}</div>\n<figcaption>{}</figcaption>\n</figure>\n",
            curve::title(self.record)
        ));
    }

    fn start_table(&mut self) {
        self.table = Table::default();
        let caption = text(&self.last_heading);
        let kind = match self.last_heading.as_str() {
            "Table of the power function" => "figures subsets",
            heading if heading.starts_with("Table of") => "figures",
            _ => "prose",
        };
        self.raw(format!(
            "<div class=\"table {kind}\" tabindex=\"0\" role=\"region\" aria-label=\"{caption}\"><table>\n<caption>{caption}</caption>\n"
        ));
    }

    fn start_cell(&mut self) {
        self.table.words.clear();
        if self.table.in_head {
            self.table.headings.push(String::new());
            self.raw("<th scope=\"col\">");
        } else if self.table.column == 0 {
            self.raw("<th scope=\"row\">");
        } else {
            let heading = self
                .table
                .headings
                .get(self.table.column)
                .map(|words| text(words))
                .unwrap_or_default();
            self.raw(format!("<td data-heading=\"{heading}\">"));
        }
    }

    fn end_cell(&mut self) {
        // The rows of the null subset are shaded, as it is in the curve.
        if self.table.column == 1
            && self.table.words == "null"
            && self.quoted == 0
            && let Some(row) = self.events.get_mut(self.table.row)
        {
            *row = Event::InlineHtml("<tr class=\"in-null\">".into());
        }
        if self.table.in_head {
            self.raw("</th>");
        } else {
            self.raw(if self.table.column == 0 {
                "</th>"
            } else {
                "</td>"
            });
            self.table.column += 1;
        }
    }

    fn finish(mut self) -> Body {
        self.close_section();
        let mut html = String::new();
        pulldown_cmark::html::push_html(&mut html, self.events.into_iter());
        Body {
            html,
            contents: self.contents,
        }
    }
}

fn slug(words: &str) -> String {
    let mut out = String::new();
    for character in words.chars() {
        if character.is_ascii_alphanumeric() {
            out.push(character.to_ascii_lowercase());
        } else if !out.ends_with('-') {
            out.push('-');
        }
    }
    out.trim_matches('-').to_owned()
}
