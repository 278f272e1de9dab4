#include <fmt/format.h>

#include <map>

#include "fieldfile/names.hpp"
#include "fieldfile/readers.hpp"

namespace scourbook::fieldfile {
namespace {

/// A record may stand once in a file, even with equal values: one of the two is a slip.
template <class Places>
void report_repeated(const Places& records, FindingSink& findings) {
  std::map<std::string, std::size_t> seen;
  for (const auto& located : records) {
    const auto [held, fresh] = seen.emplace(identity_of(located.record), located.place.line);
    if (fresh) continue;
    Finding finding = located.place;
    finding.fault =
        fmt::format("{} is in this file twice, first in line {}", key_of(located.record), held->second);
    finding.expected = "each record once";
    finding.remedy = "take one of them out, or correct its name";
    findings.add(std::move(finding));
  }
}

void read_rows(Table& table, KnownStations& known, const ReadOptions& options, ParsedFile& file) {
  switch (*file.kind) {
    case Kind::station:
      return read_stations(table, known, file);
    case Kind::gauge_zero:
      return read_gauge_zeros(table, known, file);
    case Kind::reach:
      return read_reaches(table, known, file);
    case Kind::survey:
      return read_surveys(table, known, file);
    case Kind::gauging:
      return read_gaugings(table, known, file);
    case Kind::stage_correction:
      return read_corrections(table, known, file);
    case Kind::stage:
      return read_stage(table, known, options.plain_lines, file);
  }
}

}  // namespace

const Words& quality_words() {
  static const Words kWords = [] {
    Words all;
    for (int i = 0; i <= static_cast<int>(Quality::missing); ++i) {
      all.emplace_back(scourbook::word(static_cast<Quality>(i)));
    }
    return all;
  }();
  return kWords;
}

ParsedFile read_records(ByteSource& source, const std::string& path, KnownStations& known,
                        const ReadOptions& options) {
  ParsedFile file;
  file.path = path;
  FindingSink findings(path, options.limits);
  Table table(source, findings, options.limits, options.correct);
  if (table.header()) {
    file.kind = table.header()->kind;
    read_rows(table, known, options, file);
    report_repeated(file.stations, findings);
    report_repeated(file.gauge_zeros, findings);
    report_repeated(file.reaches, findings);
    report_repeated(file.surveys, findings);
    report_repeated(file.gaugings, findings);
    report_repeated(file.corrections, findings);
  }
  file.rows = table.rows();
  file.findings = findings.take();
  return file;
}

}  // namespace scourbook::fieldfile
