//! Problems as text: place, excerpt, remarks and advice.

use annotate_snippets::{AnnotationKind, Element, Group, Level, Renderer, Snippet};

use super::mark::{Mark, Source, SourceId};
use super::problem::{Label, Problem};

/// Columns of an excerpt; longer lines are cut around the place.
const WIDTH: usize = 120;

/// A problem without color.
pub(super) fn problem(problem: &Problem, sources: &[Source]) -> String {
    let mut elements: Vec<Element<'_>> = Vec::new();
    for source in sources_of(&problem.labels) {
        let Some(Source { name, text }) = sources.get(source.0) else {
            continue;
        };
        let annotations =
            problem.labels.iter().enumerate().filter(|(_, label)| label.mark.source == source).map(|(index, label)| {
                let kind = if index == 0 { AnnotationKind::Primary } else { AnnotationKind::Context };
                let remark = (!label.text.is_empty()).then_some(label.text.as_str());
                kind.span(first_line(label.mark, text)).label(remark)
            });
        elements.push(Snippet::source(text.as_ref()).path(name.as_str()).annotations(annotations).into());
    }
    elements.extend(problem.help.iter().map(|help| Level::HELP.message(help.as_str()).into()));
    let report: [Group<'_>; 1] = [Level::ERROR.primary_title(problem.title.as_str()).elements(elements)];
    Renderer::plain().term_width(WIDTH).render(&report)
}

/// The sources of the labels, the one at fault first.
fn sources_of(labels: &[Label]) -> Vec<SourceId> {
    let mut sources = Vec::new();
    for label in labels {
        if !sources.contains(&label.mark.source) {
            sources.push(label.mark.source);
        }
    }
    sources
}

/// A mark over many lines (a section, a long list) is shown by its first line.
fn first_line(mark: Mark, text: &str) -> std::ops::Range<usize> {
    let range = mark.range();
    match text.get(range.clone()).and_then(|marked| marked.find(['\r', '\n'])) {
        Some(length) => range.start..range.start + length.max(1),
        None => range,
    }
}
