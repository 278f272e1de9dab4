#include "fieldfile/judge.hpp"

#include <fmt/format.h>

#include <map>
#include <set>

#include "fieldfile/names.hpp"
#include "terms/nearest.hpp"

namespace scourbook::fieldfile {
namespace {

std::vector<Stored<Station>> load(const store::Book& book, const std::string&, const Station&) {
  return book.stations();
}
std::vector<Stored<GaugeZeroRow>> load(const store::Book& book, const std::string& station,
                                       const GaugeZeroRow&) {
  return book.gauge_zeros(station);
}
std::vector<Stored<ReachRow>> load(const store::Book& book, const std::string& station, const ReachRow&) {
  std::vector<Stored<ReachRow>> rows;
  for (auto& row : book.reach_rows(station)) rows.push_back(std::move(row.stored));
  return rows;
}
std::vector<Stored<Survey>> load(const store::Book& book, const std::string& station, const Survey&) {
  return book.surveys(station);
}
std::vector<Stored<Gauging>> load(const store::Book& book, const std::string& station, const Gauging&) {
  return book.gaugings(station);
}
std::vector<Stored<StageCorrection>> load(const store::Book& book, const std::string& station,
                                          const StageCorrection&) {
  return book.stage_corrections(station);
}

/// Records of one kind against the book and against each other.
template <class Record>
class Judge {
 public:
  Judge(const store::Book& book, bool correct) : book_(book), correct_(correct) {}

  template <class Located>
  void judge(Located& located, ParsedFile& file) {
    const std::string key = key_of(located.record);
    const std::string identity = identity_of(located.record);
    const Stored<Record>* held = find_held(station_of(located.record), identity);
    if (located.withdrawn) {
      withdraw(located, held, key, file);
    } else if (held != nullptr && held->value == located.record) {
      located.repeated = true;
    } else if (held != nullptr && !correct_) {
      report_held(located, *held, key, file);
    } else if (held == nullptr && correct_) {
      file.remarks.push_back(key + " was not in the book: stored as new");
    }
    const auto [seen, fresh] = seen_.emplace(identity, Seen{file.path, located.place.line, located.record});
    if (fresh) return;
    if (seen->second.record == located.record) {
      located.repeated = true;
    } else {
      Finding finding = located.place;
      finding.fault = fmt::format("{} is given with other values in {}, line {}", key, seen->second.path,
                                  seen->second.line);
      finding.expected = "the same values in all files of a take";
      finding.remedy = "take one of them out";
      add(file, std::move(finding));
    }
  }

 private:
  struct Seen {
    std::string path;
    std::size_t line;
    Record record;
  };

  static void add(ParsedFile& file, Finding finding) {
    finding.file = file.path;
    file.findings.push_back(std::move(finding));
  }

  const Stored<Record>* find_held(const std::string& station, const std::string& identity) {
    if (loaded_.insert(station).second) {
      for (auto& stored : load(book_, station, Record{})) {
        std::string held_key = identity_of(stored.value);
        held_.insert_or_assign(std::move(held_key), std::move(stored));
      }
    }
    const auto held = held_.find(identity);
    return held == held_.end() ? nullptr : &held->second;
  }

  template <class Located>
  void withdraw(Located& located, const Stored<Record>* held, const std::string& key, ParsedFile& file) {
    if (held != nullptr) {
      located.record = held->value;
      return;
    }
    Finding finding = located.place;
    finding.fault = fmt::format("{} is not in the book, or is withdrawn already", key);
    finding.expected = "a record that the book holds";
    finding.remedy = "correct the name, or take the line out";
    add(file, std::move(finding));
  }

  template <class Located>
  void report_held(const Located& located, const Stored<Record>& held, const std::string& key,
                   ParsedFile& file) {
    Finding finding = located.place;
    const auto from = book_.file(held.source.file);
    finding.fault =
        fmt::format("{} is in the book with other values: version {}, act {}", key, held.version, held.act);
    if (from) finding.fault += fmt::format(", {} line {}", from->name, held.source.line);
    finding.expected = "a new record, or the same values as held";
    finding.remedy = "to replace the held version take the file in with --correct --reason TEXT";
    add(file, std::move(finding));
  }

  const store::Book& book_;
  bool correct_;
  std::set<std::string> loaded_;
  std::map<std::string, Stored<Record>> held_;
  std::map<std::string, Seen> seen_;
};

template <class Record, class Records>
void judge_all(const store::Book& book, std::vector<ParsedFile>& files, bool correct,
               Records ParsedFile::*records) {
  Judge<Record> judge(book, correct);
  for (ParsedFile& file : files) {
    for (auto& located : file.*records) judge.judge(located, file);
  }
}

/// The parts that the surveys of each cross-section of a station name.
using Parts = std::map<std::string, std::set<std::string>>;

void add_parts(const Survey& survey, Parts& parts) {
  for (const SurveyPoint& point : survey.points) parts[point.cross_section].insert(point.part);
}

Parts parts_of(const store::Book& book, const std::vector<ParsedFile>& files, const std::string& station) {
  Parts parts;
  for (const auto& stored : book.surveys(station)) add_parts(stored.value, parts);
  for (const ParsedFile& file : files) {
    for (const auto& located : file.surveys) {
      if (located.record.station == station) add_parts(located.record, parts);
    }
  }
  return parts;
}

std::string listed(const Words& words) {
  std::string list;
  for (const std::string& word : words) list.append(list.empty() ? "" : ", ").append(word);
  return list;
}

/// A part may be surveyed later; one letter beside a surveyed part is a slip.
void check_parts(const store::Book& book, std::vector<ParsedFile>& files) {
  std::map<std::string, Parts> by_station;
  for (ParsedFile& file : files) {
    for (const auto& located : file.reaches) {
      const ReachRow& reach = located.record;
      if (located.withdrawn) continue;
      const auto [known, fresh] = by_station.try_emplace(reach.station);
      if (fresh) known->second = parts_of(book, files, reach.station);
      const auto section = known->second.find(reach.cross_section);
      if (section == known->second.end() || section->second.count(reach.part) > 0) continue;
      const Words parts(section->second.begin(), section->second.end());
      const std::string nearest = nearest_word(reach.part, parts);
      if (nearest.empty()) continue;
      Finding finding = located.place;
      finding.file = file.path;
      finding.fault = fmt::format("part {} is in no survey of cross-section {}", in_quotes(reach.part),
                                  reach.cross_section);
      finding.expected = "a part of its surveys: " + listed(parts);
      finding.remedy = fmt::format("write {} if that is meant", nearest);
      file.findings.push_back(std::move(finding));
    }
  }
}

/// A held or given reading in the unit of its file, without needless zeros; "missing" where there is none.
std::string reading_text(std::int64_t ticks, const store::StageSeries& series) {
  if (ticks == store::kMissing) return "missing";
  const bool feet = series.unit == store::StageUnit::foot;
  const double value =
      static_cast<double>(ticks) / (feet ? static_cast<double>(kTicksPerFoot) : kTicksPerMetre);
  std::string text = fmt::format("{:.{}f}", value, feet ? 4 : 8);
  const std::size_t keep = text.find('.') + 1 + static_cast<std::size_t>(series.decimals);
  while (text.size() > keep && text.back() == '0') text.pop_back();
  if (text.back() == '.') text.pop_back();
  return text + (feet ? " ft" : " m");
}

/// Puts the text of their lines into findings that are sorted by line.
void show_lines(const std::string& path, Findings& findings) {
  FileBytes bytes(path);
  LineReader lines(bytes, Limits{});
  std::string_view line;
  auto finding = findings.begin();
  while (finding != findings.end() && lines.next(line) == LineReader::Status::line) {
    for (; finding != findings.end() && finding->line == lines.number(); ++finding) show_line(*finding, line);
  }
}

}  // namespace

void judge(const store::Book& book, std::vector<ParsedFile>& files, bool correct) {
  judge_all<Station>(book, files, correct, &ParsedFile::stations);
  judge_all<GaugeZeroRow>(book, files, correct, &ParsedFile::gauge_zeros);
  judge_all<ReachRow>(book, files, correct, &ParsedFile::reaches);
  judge_all<Survey>(book, files, correct, &ParsedFile::surveys);
  judge_all<Gauging>(book, files, correct, &ParsedFile::gaugings);
  judge_all<StageCorrection>(book, files, correct, &ParsedFile::corrections);
  check_parts(book, files);
}

Findings overlap_findings(const std::string& path, const store::StageSeries& series,
                          const std::vector<store::StageOverlap>& overlaps) {
  Findings findings;
  for (const auto& overlap : overlaps) {
    Finding finding;
    finding.file = path;
    finding.line = static_cast<std::size_t>(overlap.line);
    finding.column = 0;
    const bool value_differs = overlap.held != overlap.given;
    finding.fault = fmt::format(
        "station {} at {} is held as {}, given as {}", series.station, format_time(overlap.time, {}),
        value_differs ? reading_text(overlap.held, series) : word(overlap.held_quality),
        value_differs ? reading_text(overlap.given, series) : word(overlap.given_quality));
    finding.expected = "new times, or the same readings as held";
    finding.remedy = "to replace what the file spans take it in with --correct --reason TEXT";
    findings.push_back(std::move(finding));
  }
  show_lines(path, findings);
  return findings;
}

}  // namespace scourbook::fieldfile
