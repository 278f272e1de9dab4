#include <fmt/format.h>
#include <fmt/ranges.h>

#include <ostream>

#include "publish/rounding.hpp"
#include "publish/series.hpp"

namespace scourbook::publish {
namespace {

constexpr std::size_t kChunk = 1 << 16;

std::string what_of(const SeriesHead& head) {
  const MeanOver mean = head.request.mean;
  return mean == MeanOver::none ? std::string("flow at every reading")
                                : fmt::format("mean flow over each {}", word(mean));
}

std::string head_text(const store::Book& book, const SeriesHead& head, UtcOffset shown) {
  const Station& station = head.station;
  std::string text = fmt::format("# {} {}{}: {}\n", station.id, station.name,
                                 station.river.empty() ? "" : ", " + station.river, what_of(head));
  text += fmt::format("# from {} until {}\n", format_time(head.request.from, shown),
                      format_time(head.request.until, shown));
  const std::string known =
      head.known_act > 0 ? format_time(book.act(head.known_act).time, shown) : "the begin";
  if (head.request.published) {
    text += fmt::format("# published: publication{} {}; as known at act {} ({})\n",
                        head.publications.size() == 1 ? "" : "s", fmt::join(head.publications, ", "),
                        head.known_act, known);
  } else {
    text += fmt::format(
        "# working record, not published: edition {}, data version {}, method version {}, as known at act {} "
        "({})\n",
        head.edition, head.data_version, head.method, head.known_act, known);
  }
  text += "# discharge in m3/s; u95_pct: 95 % uncertainty in percent; quality: OGC WaterML 2.0 words\n";
  return text + "# " + caution() + "\n";
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
  return "Computed flows are estimates. No basis for flood warning, water supply or dam safety without "
         "checks by those "
         "responsible; local rules and licensed practice come first.";
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
