// Stage files: long, so plain lines go a short way; whatever is not plain goes the general way, with the same
// result.
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cassert>
#include <map>

#include "fieldfile/number.hpp"
#include "fieldfile/readers.hpp"

namespace scourbook::fieldfile {
namespace {

constexpr std::array<std::int64_t, 9> kPowerOfTen{1,       10,        100,        1'000,      10'000,
                                                  100'000, 1'000'000, 10'000'000, 100'000'000};
// Beyond these a reading has no whole number of ticks of 1e-8 m.
constexpr int kMostDecimalsMetre = 8;
constexpr int kMostDecimalsFoot = 4;

/// Readings of one station while they arrive, at the most decimals seen so far.
struct Draft {
  store::StageSeries series;
  std::optional<UtcOffset> offset;
};

/// A reading as recorded, before it is brought to the decimals of its series.
struct Recorded {
  Instant time{};
  std::int64_t value = store::kMissing;
  int decimals = 0;
  Quality quality = Quality::unchecked;
};

class StageReader {
 public:
  StageReader(Table& table, const KnownStations& known)
      : table_(table), known_(known), plain_columns_(plain_columns(*table.header())) {
    const Header& header = *table.header();
    unit_ = *header.cells[*header.find("stage")].unit;
  }

  void read(bool plain_lines) {
    // Behind a line that was no record the general way must see the next: it reports blank lines between
    // records.
    bool careful = !plain_lines || plain_columns_ == 0;
    Row row;
    std::string_view line;
    while (table_.next_line(line)) {
      if (!careful && take_plain(line)) continue;
      const bool is_row = table_.row_of(line, row);
      careful = !plain_lines || plain_columns_ == 0 || !is_row;
      if (is_row) take_row(row);
    }
  }

  /// The series, in the order in which their stations first stand in the file, all with its most decimals.
  std::vector<store::StageSeries> finish() {
    int decimals = 0;
    for (const auto* draft : order_) decimals = std::max(decimals, draft->series.decimals);
    std::vector<store::StageSeries> all;
    for (auto* draft : order_) {
      rescale(draft->series, decimals);
      all.push_back(std::move(draft->series));
    }
    return all;
  }

 private:
  /// Number of columns where they stand in the plain order station, time, stage, [quality]; else 0.
  static std::size_t plain_columns(const Header& header) {
    constexpr std::array<std::string_view, 4> kPlain{"station", "time", "stage", "quality"};
    for (std::size_t i = 0; i < header.cells.size(); ++i) {
      if (header.find(kPlain[i]) != i) return 0;
    }
    return header.cells.size();
  }

  Draft& draft_of(std::string_view station) {
    const auto held = drafts_.find(station);
    if (held != drafts_.end()) return held->second;
    Draft& draft = drafts_[std::string(station)];
    draft.series.station = station;
    draft.series.unit = unit_.feet ? store::StageUnit::foot : store::StageUnit::metre;
    draft.series.decimals = 0;
    draft.offset = known_.find(station)->second.offset.value_or(UtcOffset{});
    order_.push_back(&draft);
    return draft;
  }

  static void rescale(store::StageSeries& series, int decimals) {
    assert(decimals >= series.decimals);
    const std::int64_t factor = kPowerOfTen[static_cast<std::size_t>(decimals - series.decimals)];
    series.decimals = decimals;
    if (factor == 1) return;
    for (auto& reading : series.readings) {
      if (reading.value != store::kMissing) reading.value *= factor;
    }
  }

  void append(Draft& draft, const Recorded& recorded, std::size_t line) {
    store::StageSeries& series = draft.series;
    if (recorded.decimals > series.decimals) rescale(series, recorded.decimals);
    std::int64_t value = recorded.value;
    if (value != store::kMissing)
      value *= kPowerOfTen[static_cast<std::size_t>(series.decimals - recorded.decimals)];
    series.readings.push_back({recorded.time, value, recorded.quality, static_cast<std::int64_t>(line)});
  }

  [[nodiscard]] int most_decimals() const { return unit_.feet ? kMostDecimalsFoot : kMostDecimalsMetre; }

  /// `decimals` must not be over most_decimals().
  [[nodiscard]] bool in_range(std::int64_t value, int decimals) const {
    const double metres = static_cast<double>(value) /
                          static_cast<double>(kPowerOfTen[static_cast<std::size_t>(decimals)]) * unit_.to_si;
    return metres >= kElevation.least && metres <= kElevation.most;
  }

  /// The short way: takes the line where it is plain and right in every way, else leaves it untouched.
  bool take_plain(std::string_view line) {
    const std::size_t first = line.find(',');
    if (first == std::string_view::npos) return false;
    const std::string_view station = line.substr(0, first);
    if (last_ == nullptr || last_->series.station != station) {
      const auto held = drafts_.find(station);
      if (held == drafts_.end()) return false;
      last_ = &held->second;
    }
    const std::size_t second = line.find(',', first + 1);
    if (second == std::string_view::npos) return false;
    Recorded recorded;
    const ParsedTime time = parse_time(line.substr(first + 1, second - first - 1), last_->offset);
    if (!time.ok() || (!last_->series.readings.empty() && time.time <= last_->series.readings.back().time))
      return false;
    recorded.time = time.time;
    if (!plain_value(line.substr(second + 1), recorded)) return false;
    append(*last_, recorded, table_.line_number());
    table_.count_row();
    return true;
  }

  /// Stage and quality, the rest of a plain line.
  bool plain_value(std::string_view rest, Recorded& recorded) const {
    std::string_view quality;
    if (plain_columns_ == 4) {
      const std::size_t comma = rest.find(',');
      if (comma == std::string_view::npos) return false;
      quality = rest.substr(comma + 1);
      rest = rest.substr(0, comma);
    }
    if (!quality.empty()) {
      const auto known = parse_quality(quality);
      if (!known) return false;
      recorded.quality = *known;
    }
    if (rest.empty()) {
      recorded.quality = Quality::missing;
      return true;
    }
    return recorded.quality != Quality::missing && parse_decimal(rest, recorded.value, recorded.decimals) &&
           recorded.decimals <= most_decimals() && in_range(recorded.value, recorded.decimals);
  }

  /// The general way: any order of columns, quotes, blanks, and a finding for every rule that is broken.
  void take_row(Row& row) {
    const std::string station = row.station(known_);
    const auto time = row.time("time", known_);
    Recorded recorded;
    read_value(row, recorded);
    if (known_.find(station) == known_.end()) return;
    Draft& draft = draft_of(station);
    if (!time) return;
    recorded.time = *time;
    check_order(row, draft, *time);
    // A faulty reading keeps its time: the next is compared with it.
    append(draft, recorded, row.line());
  }

  void read_value(Row& row, Recorded& recorded) const {
    if (const auto quality = row.word("quality", quality_words(), false)) {
      recorded.quality = static_cast<Quality>(*quality);
    }
    if (row.blank("stage")) {
      recorded.quality = Quality::missing;
      return;
    }
    const std::string_view text = row.text("stage");
    Recorded plain;
    if (!parse_decimal(text, plain.value, plain.decimals)) {
      not_plain(row, text);
    } else if (plain.decimals > most_decimals()) {
      row.fault("stage", fmt::format("{} has {} decimals: {}", row.title("stage"), plain.decimals, text),
                fmt::format("at most {} decimals", most_decimals()));
    } else if (!in_range(plain.value, plain.decimals)) {
      row.fault("stage", fmt::format("{} is out of range: {}", row.title("stage"), text), kElevation.expected,
                "leave the field blank where the reading is missing");
    } else {
      recorded.value = plain.value;
      recorded.decimals = plain.decimals;
      if (recorded.quality == Quality::missing) {
        row.fault("quality", fmt::format("quality is missing, but there is a reading: {}", text),
                  "a blank stage where the reading is missing");
      }
    }
  }

  static void not_plain(Row& row, std::string_view text) {
    const NumberFault bad = parse_number(text).fault;
    row.fault(
        "stage", fmt::format("{} {}: {}", row.title("stage"), explain(bad), in_quotes(text)),
        "a plain decimal number with a point, or blank where the reading is missing",
        bad == NumberFault::none ? "write the digits out, without exponent" : remedy_of(bad, text, true));
  }

  static void check_order(Row& row, const Draft& draft, Instant time) {
    if (draft.series.readings.empty()) return;
    const store::StageReading& before = draft.series.readings.back();
    if (time > before.time) return;
    const std::string text = in_quotes(row.text("time"));
    if (time == before.time) {
      row.fault(
          "time",
          fmt::format("time {} of station {} is in line {} already", text, draft.series.station, before.line),
          "each time once", "take one of the two lines out");
    } else {
      row.fault("time",
                fmt::format("time goes back: {} is before line {}, {}", text, before.line,
                            format_time(before.time, *draft.offset)),
                "times that rise from line to line, for each station", "put the lines in order of time");
    }
  }

  Table& table_;
  const KnownStations& known_;
  std::size_t plain_columns_;
  Unit unit_{};
  std::map<std::string, Draft, std::less<>> drafts_;
  std::vector<Draft*> order_;
  Draft* last_ = nullptr;  // of the line before: most files hold one station
};

}  // namespace

void read_stage(Table& table, const KnownStations& known, bool plain_lines, ParsedFile& file) {
  StageReader reader(table, known);
  reader.read(plain_lines);
  file.stage = reader.finish();
}

}  // namespace scourbook::fieldfile
