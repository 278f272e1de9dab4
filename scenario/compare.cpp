// Holds flow series written by `scourbook flows` against the truth, period by period of the real bed.
//
//   scenario_compare TRUTH_FOLDER STATION LABEL=FLOWS.csv [LABEL=FLOWS.csv ...] [--limit RMS]
//
// Values are matched by time. rms, median and 90th percentile are of |ln(Q / truth)| where both are above
// zero; values where only one of them is zero are counted apart. Volume is over the times that the series
// covers. With --limit the exit status is 1 where the rms of the first series over all years exceeds it.

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <fstream>
#include <stdexcept>
#include <string>
#include <vector>

#include "calendar.hpp"
#include "weather.hpp"

namespace {

using namespace scenario;

constexpr double kNone = -1;

struct Series {
  std::string label;
  std::vector<double> flow_m3s;  ///< a value a step, kNone where not given
};

struct Period {
  std::string what;
  std::size_t from = 0, until = 0;  ///< steps
};

std::vector<std::string> fields(const std::string& line) {
  std::vector<std::string> result(1);
  for (char c : line) {
    if (c == ',') {
      result.emplace_back();
    } else if (c != '\r') {
      result.back() += c;
    }
  }
  return result;
}

std::size_t column(const std::vector<std::string>& header, const std::string& name, const std::string& file) {
  const auto found = std::find(header.begin(), header.end(), name);
  if (found == header.end()) throw std::runtime_error(file + ": no column " + name);
  return static_cast<std::size_t>(found - header.begin());
}

/// Columns time and discharge_m3s of a CSV file, lines with # skipped; times that are no step are skipped.
std::vector<double> read_flows(const std::string& file) {
  std::ifstream in(file);
  if (!in) throw std::runtime_error("cannot read " + file);
  std::vector<double> flows(step_of(kEnd), kNone);
  std::vector<std::string> header;
  std::size_t time_at = 0, flow_at = 0;
  for (std::string line; std::getline(in, line);) {
    if (line.empty() || line[0] == '#') continue;
    const auto cells = fields(line);
    if (header.empty()) {
      header = cells;
      time_at = column(header, "time", file);
      flow_at = column(header, "discharge_m3s", file);
      continue;
    }
    if (cells.size() <= std::max(time_at, flow_at)) throw std::runtime_error(file + ": short line: " + line);
    const auto time = parse_time(cells[time_at], kHour);
    if (!time) throw std::runtime_error(file + ": no time: " + line);
    if (cells[flow_at].empty() || *time < kBegin || *time >= kEnd || (*time - kBegin) % kStep != 0) continue;
    flows[step_of(*time)] = std::strtod(cells[flow_at].c_str(), nullptr);
  }
  return flows;
}

std::vector<Period> read_periods(const std::string& file, const std::string& station) {
  std::ifstream in(file);
  if (!in) throw std::runtime_error("cannot read " + file);
  std::vector<Period> periods;
  for (std::string line; std::getline(in, line);) {
    const auto cells = fields(line);
    if (cells.size() != 3 || cells[0] != station) continue;
    const std::size_t from = step_of(parse_time(cells[1], 0).value());
    if (!periods.empty()) periods.back().until = from;
    periods.push_back({cells[2] + " (from " + local_text(time_of(from), kHour) + ")", from, step_of(kEnd)});
  }
  if (periods.empty()) throw std::runtime_error(file + ": nothing about " + station);
  return periods;
}

struct Distance {
  std::size_t values = 0, one_is_zero = 0;
  double rms = 0, median = 0, p90 = 0, volume_pct = 0;
};

Distance distance(const std::vector<double>& flows, const std::vector<double>& truth, const Period& period) {
  Distance result;
  std::vector<double> errors;
  double volume = 0, true_volume = 0, squares = 0;
  for (std::size_t i = period.from; i < period.until; ++i) {
    if (flows[i] == kNone || truth[i] == kNone) continue;
    ++result.values;
    volume += flows[i];
    true_volume += truth[i];
    if ((flows[i] > 0) != (truth[i] > 0)) ++result.one_is_zero;
    if (flows[i] <= 0 || truth[i] <= 0) continue;
    const double error = std::log(flows[i] / truth[i]);
    squares += error * error;
    errors.push_back(std::abs(error));
  }
  if (errors.empty()) return result;
  std::sort(errors.begin(), errors.end());
  result.rms = std::sqrt(squares / static_cast<double>(errors.size()));
  result.median = errors[errors.size() / 2];
  result.p90 = errors[errors.size() * 9 / 10];
  result.volume_pct = 100 * (volume / true_volume - 1);
  return result;
}

int compare(const std::vector<std::string>& arguments, double limit) {
  const std::string &folder = arguments[0], &station = arguments[1];
  const auto truth = read_flows(folder + "/" + station + ".csv");
  auto periods = read_periods(folder + "/changes.csv", station);
  periods.push_back({"all ten years", 0, step_of(kEnd)});
  std::vector<Series> all;
  for (std::size_t i = 2; i < arguments.size(); ++i) {
    const auto equals = arguments[i].find('=');
    if (equals == std::string::npos) throw std::runtime_error("not LABEL=FILE: " + arguments[i]);
    all.push_back({arguments[i].substr(0, equals), read_flows(arguments[i].substr(equals + 1))});
  }
  std::printf("%s: computed flow against the truth, every 15 minutes\n", station.c_str());
  std::printf("  %-34s %8s %9s %9s %9s %9s %9s\n", "", "values", "rms lnQ", "median", "90 %", "volume",
              "one is 0");
  double first_rms = 0;
  for (const Period& period : periods) {
    std::printf("  %s\n", period.what.c_str());
    for (const Series& series : all) {
      const Distance d = distance(series.flow_m3s, truth, period);
      std::printf("    %-32s %8zu %9.4f %8.1f%% %8.1f%% %+8.1f%% %9zu\n", series.label.c_str(), d.values,
                  d.rms, 100 * d.median, 100 * d.p90, d.volume_pct, d.one_is_zero);
      if (&series == &all.front()) first_rms = d.rms;
    }
  }
  if (limit > 0 && !(first_rms <= limit)) {
    std::fprintf(stderr, "%s is %.4f from the truth, more than %.4f\n", all.front().label.c_str(), first_rms,
                 limit);
    return 1;
  }
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  std::vector<std::string> arguments;
  double limit = 0;
  for (int i = 1; i < argc; ++i) {
    if (std::string(argv[i]) == "--limit" && i + 1 < argc) {
      limit = std::strtod(argv[++i], nullptr);
    } else {
      arguments.emplace_back(argv[i]);
    }
  }
  if (arguments.size() < 3) {
    std::fputs(
        "usage: scenario_compare TRUTH_FOLDER STATION LABEL=FLOWS.csv [LABEL=FLOWS.csv ...] [--limit RMS]\n",
        stderr);
    return 2;
  }
  try {
    return compare(arguments, limit);
  } catch (const std::exception& failure) {
    std::fprintf(stderr, "%s\n", failure.what());
    return 2;
  }
}
