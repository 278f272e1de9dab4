#include "fieldfile/take.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <numeric>
#include <optional>
#include <set>

#include "fieldfile/judge.hpp"
#include "fieldfile/names.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr std::size_t kMostOverlaps = 10'000;

std::string name_without_folders(const std::string& path) {
  return path.substr(path.find_last_of('/') + 1);
}

/// Kind by the header alone; none where the file cannot be understood, which its reading then says.
std::optional<Kind> peek_kind(const std::string& path) {
  FileBytes bytes(path);
  FindingSink findings(path, Limits{});
  const Table table(bytes, findings, Limits{}, true);
  return table.header() ? std::optional(table.header()->kind) : std::nullopt;
}

/// One take from reading to commit. Small kinds are read, judged and added together; stage files follow one
/// by one, so that memory holds the largest of them and not their sum. All inside one act: a finding anywhere
/// drops it.
class Taking {
 public:
  Taking(store::Book& book, const std::vector<std::string>& paths, const TakeOptions& options)
      : book_(book), paths_(paths), options_(options) {}

  Taken run() {
    taken_.files.resize(paths_.size());
    findings_.resize(paths_.size());
    for (const std::string& path : paths_) all_bytes_ += file_size(path);
    for (const auto& stored : book_.stations()) {
      known_[stored.value.id].offset = stored.value.clock.offset;
      in_book_.insert(stored.value.id);
    }
    read_small_kinds();
    judge(book_, small_, options_.correct);
    for (std::size_t i = 0; i < small_.size(); ++i) {
      keep_findings(order_[i], std::move(small_[i].findings));
      taken_.files[order_[i]].remarks = std::move(small_[i].remarks);
    }
    write();
    for (auto& findings : findings_) {
      taken_.findings.insert(taken_.findings.end(), findings.begin(), findings.end());
    }
    return std::move(taken_);
  }

 private:
  /// Indexes of the files, those first that others rest on; files not understood come among the small ones.
  void order_files() {
    std::vector<std::optional<Kind>> kinds;
    for (const std::string& path : paths_) kinds.push_back(peek_kind(path));
    order_.resize(paths_.size());
    std::iota(order_.begin(), order_.end(), std::size_t{0});
    std::stable_sort(order_.begin(), order_.end(), [&](std::size_t a, std::size_t b) {
      return kinds[a].value_or(Kind::station) < kinds[b].value_or(Kind::station);
    });
    small_count_ = static_cast<std::size_t>(
        std::count_if(kinds.begin(), kinds.end(), [](const auto& kind) { return kind != Kind::stage; }));
  }

  ParsedFile read(std::size_t index) {
    FileBytes bytes(paths_[index], [this](std::int64_t count) {
      done_bytes_ += count;
      if (options_.progress) options_.progress(done_bytes_, all_bytes_);
    });
    ReadOptions read_options;
    read_options.correct = options_.correct;
    ParsedFile file = read_records(bytes, paths_[index], known_, read_options);
    file.bytes = bytes.bytes();
    file.sha256 = bytes.sha256();
    return file;
  }

  void read_small_kinds() {
    order_files();
    for (std::size_t i = 0; i < small_count_; ++i) {
      small_.push_back(read(order_[i]));
      note(order_[i], small_.back());
    }
  }

  /// What the report says of a file before anything is stored.
  void note(std::size_t index, const ParsedFile& file) {
    FileTaken& told = taken_.files[index];
    told.file = file.path;
    told.kind = file.kind ? std::string(word(*file.kind)) : "";
    told.rows = file.rows;
    std::set<std::string> stations;
    const auto collect = [&](const auto& records) {
      for (const auto& located : records) stations.insert(station_of(located.record));
    };
    collect(file.stations);
    collect(file.gauge_zeros);
    collect(file.reaches);
    collect(file.surveys);
    collect(file.gaugings);
    collect(file.corrections);
    for (const auto& series : file.stage) stations.insert(series.station);
    told.stations.assign(stations.begin(), stations.end());
  }

  void keep_findings(std::size_t index, Findings findings) {
    auto& kept = findings_[index];
    any_finding_ = any_finding_ || !findings.empty();
    kept.insert(kept.end(), std::make_move_iterator(findings.begin()),
                std::make_move_iterator(findings.end()));
  }

  /// The act's station where the take concerns one. Of several stage files only the first is read before the
  /// act.
  std::string only_station() const {
    std::set<std::string> stations;
    for (const FileTaken& told : taken_.files) stations.insert(told.stations.begin(), told.stations.end());
    return stations.size() == 1 && small_count_ + 1 >= paths_.size() ? *stations.begin() : "";
  }

  void write() {
    std::optional<ParsedFile> stage;
    if (small_count_ < paths_.size()) stage = read_stage_file(order_[small_count_]);
    if (any_finding_ && small_count_ == paths_.size()) return;
    auto writer = book_.begin({options_.who, only_station(), options_.reason, options_.command});
    for (std::size_t i = 0; i < small_.size() && !any_finding_; ++i) add_small(writer, order_[i], small_[i]);
    for (std::size_t i = small_count_; i < order_.size(); ++i) {
      if (i > small_count_) stage = read_stage_file(order_[i]);
      take_stage(writer, order_[i], *stage);
    }
    const bool anything = std::any_of(taken_.files.begin(), taken_.files.end(),
                                      [](const FileTaken& told) { return told.stored > 0; });
    if (any_finding_) {
      for (FileTaken& told : taken_.files) told.stored = 0;
    } else if (anything) {
      taken_.act = writer.commit().number;
    }
  }

  std::int64_t add_file(store::Writer& writer, const ParsedFile& file) {
    return writer.add_file(name_without_folders(file.path), file.bytes, file.sha256,
                           std::string(word(*file.kind)));
  }

  void add_small(store::Writer& writer, std::size_t index, const ParsedFile& file) {
    const std::int64_t id = add_file(writer, file);
    const auto add = [&](const auto& records) {
      for (const auto& located : records) add_one(writer, index, id, located);
    };
    add(file.stations);
    add(file.gauge_zeros);
    add(file.reaches);
    add(file.surveys);
    add(file.gaugings);
    add(file.corrections);
  }

  template <class Located>
  void add_one(store::Writer& writer, std::size_t index, std::int64_t file, const Located& located) {
    if (located.repeated) {
      ++taken_.files[index].repeated;
      return;
    }
    const SourceLine source{file, static_cast<std::int64_t>(located.place.line)};
    try {
      add_record(writer, located, source);
      ++taken_.files[index].stored;
    } catch (const store::StoreError& error) {
      // The book refuses a record it once held and that was withdrawn since: no reader can see that
      // beforehand.
      if (error.kind() != store::StoreError::Kind::refused) throw;
      Finding finding = located.place;
      finding.file = paths_[index];
      finding.fault = fmt::format("{}: {}", key_of(located.record), error.what());
      finding.expected = "a new record";
      finding.remedy = "to bring it back take the file in with --correct --reason TEXT";
      keep_findings(index, {std::move(finding)});
    }
  }

  template <class Located>
  void add_record(store::Writer& writer, const Located& located, SourceLine source) {
    writer.add(located.record, source, options_.correct, located.withdrawn);
  }
  void add_record(store::Writer& writer, const LocatedSurvey& located, SourceLine source) {
    // A withdrawn survey keeps its points; they come from no line of this file but that of the withdrawal.
    std::vector<std::int64_t> lines = located.point_lines;
    lines.resize(located.record.points.size(), source.line);
    writer.add(located.record, source, lines, options_.correct, located.withdrawn);
  }

  ParsedFile read_stage_file(std::size_t index) {
    ParsedFile file = read(index);
    note(index, file);
    keep_findings(index, std::move(file.findings));
    return file;
  }

  void take_stage(store::Writer& writer, std::size_t index, const ParsedFile& file) {
    if (!options_.correct) {
      for (const auto& series : file.stage) check_overlaps(writer, index, series);
    }
    if (any_finding_) return;
    const std::int64_t id = add_file(writer, file);
    for (const auto& series : file.stage) {
      const store::StageTaken went = writer.add_stage(series, id, options_.correct);
      taken_.files[index].stored += went.added;
      taken_.files[index].repeated += went.repeated;
    }
  }

  void check_overlaps(store::Writer& writer, std::size_t index, const store::StageSeries& series) {
    // A station of this take is not in the act when findings kept it out.
    if (any_finding_ && in_book_.count(series.station) == 0) return;
    const auto overlaps = writer.overlaps(series, kMostOverlaps);
    keep_findings(index, overlap_findings(paths_[index], series, overlaps));
  }

  store::Book& book_;
  const std::vector<std::string>& paths_;
  const TakeOptions& options_;
  Taken taken_;
  std::vector<Findings> findings_;  // by file, in the order given
  KnownStations known_;
  std::set<std::string> in_book_;
  std::vector<std::size_t> order_;
  std::size_t small_count_ = 0;
  std::vector<ParsedFile> small_;
  bool any_finding_ = false;
  std::int64_t done_bytes_ = 0;
  std::int64_t all_bytes_ = 0;
};

}  // namespace

Taken take(store::Book& book, const std::vector<std::string>& paths, const TakeOptions& options) {
  if (options.correct && options.reason.empty()) {
    Taken refused;
    Finding finding;
    finding.file = "take";
    finding.fault = "a correction has no reason";
    finding.expected = "why held records are replaced";
    finding.remedy = "add --reason TEXT";
    refused.findings.push_back(std::move(finding));
    return refused;
  }
  return Taking(book, paths, options).run();
}

}  // namespace scourbook::fieldfile
