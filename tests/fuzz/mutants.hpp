#pragma once
// Deterministic mutants of good field files: the same seed gives the same files on every machine.

#include <cstdint>
#include <random>
#include <string>
#include <vector>

namespace scourbook::fuzz {

/// One small good file of each kind; the stations TAR-1 and TAR-2 are described by the first.
inline const std::vector<std::string>& good_files() {
  static const std::vector<std::string> files{
      "# stations\nstation,name,river,utc_offset,day_start,water_year_month,latitude,longitude,remark\n"
      "TAR-1,Millmark,Tarrowen,+01:00,09:00,10,51.5,-2.25,\"at the \"\"old\"\" mill\"\n"
      "TAR-2,Lowbridge,Tarrowen,Z,,,,,\n",
      "station,valid_from,gauge_zero_ft,remark\nTAR-1,2010-01-01,410.105,\nTAR-2,2010-01-01T00:00Z,12.5,"
      "levelled\n",
      "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n,chezy_c,coefficient,meander_"
      "factor,"
      "scale_sd_pct,level_from_m,level_to_m\n"
      "TAR-1,2010-01-01,section,X1,,critical,,,,0.95,,5,,\n"
      "TAR-1,2010-01-01,channel,X1,main,manning,0.0012,0.035,,,1.1,15,10,12\n"
      "TAR-1,2010-01-01,overbank,X1,left,chezy,0.001,,25,,,,,\n",
      "station,survey,surveyed_at,cross_section,part,distance_m,elevation_m,level_uncertainty_m,mark,remark\n"
      "TAR-1,S1,2010-05-01,X1,left,0,12,0.02,BM1,\"after,\nflood\"\nTAR-1,S1,,X1,main,5,9,,,\nTAR-1,S1,,X1,,"
      "9,8,,,\n"
      "TAR-1,S1,,X1,,12,12,,,\n",
      "station,gauging,start,end,stage_m,stage_end_m,discharge_ft3s,uncertainty_pct,method,quality\n"
      "TAR-1,G1,2010-01-01T10:00,2010-01-01T11:00,1.25,1.27,123.4,8,current meter,good\n"
      "TAR-1,G2,2010-02-01T10:00,,0.12,,0,,,\nTAR-1,G3,2010-03-01T10:00,,0.1,,,,zero-flow-level,\n",
      "station,from,until,add_at_from_m,add_at_until_m,remark\nTAR-1,2010-03-01,2010-04-01,0,-0.02,drift\n",
      "station,time,stage_m,quality\nTAR-1,2010-01-01T00:00,1.25,good\nTAR-1,2010-01-01T00:15,1.251,\n"
      "TAR-2,2010-01-01T00:00Z,,missing\nTAR-1,2010-01-01T00:30+01:00,-0.3,suspect\n"};
  return files;
}

/// Makes mutants of the good files by a few edits each.
class Mutants {
 public:
  explicit Mutants(std::uint64_t seed) : random_(seed) {}

  std::string next() {
    std::string text = good_files()[below(good_files().size())];
    for (std::size_t edits = 1 + below(4); edits > 0; --edits) edit(text);
    return text;
  }

 private:
  std::size_t below(std::size_t count) { return static_cast<std::size_t>(random_() % count); }

  void edit(std::string& text) {
    static const std::vector<std::string> kTokens{",",          "\"",       "\"\"",
                                                  "\n",         "\r",       "\r\n",
                                                  "\n\n",       "#",        ";",
                                                  "\t",         " ",        std::string(1, '\0'),
                                                  "\xFF",       "\xC3\xA9", "\xEF\xBB\xBF",
                                                  "-",          "+",        ".",
                                                  "e9",         "1e400",    "NaN",
                                                  "inf",        "0x1",      "9999999999999999999",
                                                  "2019-02-29", "T25:00",   "_cm",
                                                  "_ft",        "yes",      "withdrawn",
                                                  "TAR-9",      "station",  "Z",
                                                  "+14:00",     "x",        std::string(300, 'y')};
    const std::size_t at = below(text.size() + 1);
    const std::size_t length = std::min(text.size() - at, below(12));
    switch (below(7)) {
      case 0:
        text.insert(at, kTokens[below(kTokens.size())]);
        break;
      case 1:
        text.erase(at, length);
        break;
      case 2:
        if (at < text.size()) text[at] = static_cast<char>(below(256));
        break;
      case 3:
        text.replace(at, length, kTokens[below(kTokens.size())]);
        break;
      case 4:
        repeat_line(text, at);
        break;
      case 5:
        text.resize(at);
        break;
      default:
        splice(text, at);
        break;
    }
  }

  void repeat_line(std::string& text, std::size_t at) {
    const std::size_t end = text.find('\n', at);
    if (end == std::string::npos) return;
    const std::size_t begin = text.rfind('\n', at == 0 ? 0 : at - 1);
    text.insert(end + 1, text.substr(begin == std::string::npos ? 0 : begin + 1,
                                     end - (begin == std::string::npos ? 0 : begin + 1) + 1));
  }

  void splice(std::string& text, std::size_t at) {
    const std::string& other = good_files()[below(good_files().size())];
    text = text.substr(0, at) + other.substr(below(other.size()));
  }

  std::mt19937_64 random_;
};

}  // namespace scourbook::fuzz
