#pragma once
// Records of a take against each other and against the book: what is new, what repeats, what contradicts.

#include <vector>

#include "fieldfile/parsed.hpp"
#include "store/book.hpp"

namespace scourbook::fieldfile {

/// Goes through all records but stage. A record equal to a held one, or to one in another file of the take,
/// is marked repeated; one that differs from a held one is a finding of its file unless `correct`; two that
/// differ in one take always are. A withdrawn record must be held: its content is filled in from there. A
/// reach row whose part none of the surveys of its cross-section knows is a finding where one of their parts
/// has nearly the same name.
void judge(const store::Book& book, std::vector<ParsedFile>& files, bool correct);

/// Findings for readings that contradict held ones; `path` is read again for the text of their lines.
[[nodiscard]] Findings overlap_findings(const std::string& path, const store::StageSeries& series,
                                        const std::vector<store::StageOverlap>& overlaps);

}  // namespace scourbook::fieldfile
