#include <fmt/format.h>
#include <fmt/ranges.h>

#include <ostream>

#include "publish/rounding.hpp"
#include "publish/series.hpp"

namespace scourbook::publish {
namespace {

constexpr std::size_t kChunk = 1 << 16;

/// Lines that start with "# ", none longer than 159 bytes unless one word is. What would end a line (a name
/// may hold it) becomes a space.
std::string comment(const std::string& text) {
  constexpr std::size_t kWidth = 159;
  std::string lines, line = "#", word;
  const auto take = [&] {
    if (line.size() > 1 && line.size() + 1 + word.size() > kWidth) {
      lines += line + "\n";
      line = "# ";
    }
    if (!word.empty()) line += " " + word;
    word.clear();
  };
  for (const char c : text) {
    const bool is_space = c == ' ' || (c >= 0 && c < 32) || c == 127;
    if (is_space) {
      take();
    } else {
      word += c;
    }
  }
  take();
  return lines + line + "\n";
}

std::string what_of(const SeriesHead& head) {
  const MeanOver mean = head.request.mean;
  const std::string what = mean == MeanOver::none
                               ? std::string("flow at every reading")
                               : fmt::format("mean flow of each {} (station clock)",
                                             mean == MeanOver::water_year ? "water year" : word(mean));
  return what;
}

/// Which state of knowledge it is.
std::string state_of(const SeriesHead& head, const std::string& known) {
  if (head.request.published) {
    return fmt::format("published: publication{} {}; as known at act {} ({})",
                       head.publications.size() == 1 ? "" : "s", fmt::join(head.publications, ", "),
                       head.known_act, known);
  }
  return fmt::format(
      "working record, not published: edition {}, data version {}, method version {}, as known at act {} "
      "({})",
      head.edition, head.data_version, head.method, head.known_act, known);
}

std::string columns_of(const SeriesHead& head) {
  const bool mean = head.request.mean != MeanOver::none;
  return fmt::format(
      "columns: time {}; discharge_m3s in m3/s, empty where there is none; u95_pct its 95 % uncertainty in "
      "percent; quality in the words of OGC WaterML 2.0; curve the rating curves that took part, survey "
      "theirs; flags of the flow{}",
      mean ? "the date on which it begins" : "of the reading",
      mean ? "; share of it with a flow, 0 to 1" : "");
}

std::string head_text(const store::Book& book, const SeriesHead& head, UtcOffset shown) {
  const Station& station = head.station;
  const std::string known =
      head.known_act > 0 ? format_time(book.act(head.known_act).time, shown) : "before the first act";
  std::string text = comment("station " + station.id + ": " + station.name);
  if (!station.river.empty()) text += comment("river " + station.river);
  text += comment(what_of(head));
  text += comment(fmt::format("from {} until {} (excluded)", format_time(head.request.from, shown),
                              format_time(head.request.until, shown)));
  text += comment(state_of(head, known));
  return text + comment(columns_of(head)) + comment(caution());
}

std::string survey_words(const SeriesRow& row, const SeriesHead& head) {
  std::string words;
  for (const int curve : row.curves) {
    const auto at = static_cast<std::size_t>(curve);
    const std::string survey = at < head.survey_of_curve.size() ? head.survey_of_curve[at] : std::string();
    if (!survey.empty()) words += (words.empty() ? "" : " ") + survey;
  }
  return words;
}

/// A field in quotes where RFC 4180 needs them.
std::string field(const std::string& text) {
  if (text.find_first_of(",\"\r\n") == std::string::npos) return text;
  std::string quoted = "\"";
  for (const char c : text) quoted += c == '"' ? std::string("\"\"") : std::string(1, c);
  return quoted + "\"";
}

std::string time_words(const SeriesRow& row, const SeriesHead& head, UtcOffset shown) {
  if (head.request.mean == MeanOver::none) return format_time(row.time, shown);
  return format_day(day_of(row.time, head.station.clock));
}

void append_row(fmt::memory_buffer& out, const SeriesRow& row, const SeriesHead& head, UtcOffset shown) {
  auto to = fmt::appender(out);
  fmt::format_to(to, "{},", time_words(row, head, shown));
  if (row.discharge_m3s) {
    const bool as_published = head.request.published && head.request.mean <= MeanOver::day;
    if (as_published) {
      fmt::format_to(to, "{},", format_published(row.units, head.decimals, head.digits));
    } else {
      fmt::format_to(to, "{:.7g},", *row.discharge_m3s);
    }
    fmt::format_to(to, "{:.1f},", row.u95_pct);
  } else {
    fmt::format_to(to, ",,");
  }
  fmt::format_to(to, "{},{},{},{}", word(row.quality), fmt::join(row.curves, " "),
                 field(survey_words(row, head)), words(row.flags));
  if (head.request.mean != MeanOver::none) fmt::format_to(to, ",{:.4f}", row.share);
  fmt::format_to(to, "\n");
}

}  // namespace

std::string caution() {
  return "Flows are estimates from curves: not for flood, water supply or dam safety decisions unless those "
         "responsible check; local rules, licensed practice prevail.";
}

void write_csv(const store::Book& book, const SeriesRequest& request, UtcOffset shown, std::ostream& out) {
  SeriesHead head;
  fmt::memory_buffer buffer;
  const auto flush = [&] {
    out.write(buffer.data(), static_cast<std::streamsize>(buffer.size()));
    buffer.clear();
  };
  run_series(
      book, request,
      [&](const SeriesHead& given) {
        head = given;
        out << head_text(book, head, shown);
        out << "time,discharge_m3s,u95_pct,quality,curve,survey,flags"
            << (request.mean == MeanOver::none ? "\n" : ",share\n");
      },
      [&](const SeriesRow& row) {
        append_row(buffer, row, head, shown);
        if (buffer.size() > kChunk) flush();
      });
  flush();
}

}  // namespace scourbook::publish
