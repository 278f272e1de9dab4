#include "field.hpp"

#include <cstdio>

namespace scenario {

std::string fixed(double value, int decimals) {
  char text[64];
  std::snprintf(text, sizeof text, "%.*f", decimals, value);
  return text;
}

TextFile station_file() {
  return {
      "stations.csv",
      "station,name,river,utc_offset,water_year_month,latitude,longitude,remark\n"
      "TAR-1,Millmark,Tarrowen,+01:00,10,,,invented; pressure sensor in a well and a staff on the pile wall\n"
      "TAR-2,Lowbridge,Tarrowen,+01:00,10,,,invented; float on the left pier\n"};
}

TextFile gauge_zero_file(const Site& millmark, const Site& lowbridge) {
  std::string text = "station,valid_from,gauge_zero_m,remark\n";
  for (const Site* site : {&millmark, &lowbridge}) {
    for (const GaugeZero& row : site->zeros) {
      const bool first = row.from == kBegin;
      text += site->id + "," + local_text(row.from, kHour) + "," + fixed(row.zero_m, 3) + "," +
              (first ? "levelled from the station's bench mark"
                     : "staff set anew after ice damage; levelled by technician B") +
              "\n";
    }
  }
  return {"gauge_zero.csv", text};
}

TextFile reach_file() {
  return {"reach.csv",
          "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n,coefficient,meander_"
          "factor,remark\n"
          "TAR-1,2015-10-01T00:00,section,BAR,main,critical,,,1,,rock bar 40 m below the gauge\n"
          "TAR-1,2015-10-01T00:00,channel,GAUGE,main,manning,0.0012,0.036,,1,slope from flood marks; gravel "
          "and stones\n"
          "TAR-1,2015-10-01T00:00,overbank,GAUGE,meadow,manning,0.0012,0.07,,1,high grass and a few willows\n"
          "TAR-2,2015-10-01T00:00,channel,PIER,main,manning,0.0009,0.033,,1,straight reach between "
          "embankments\n"};
}

TextFile stage_correction_file() {
  return {"stage_corrections.csv",
          "station,from,until,add_at_from_m,add_at_until_m,remark\n"
          "TAR-1,2017-03-10T00:00,2017-05-02T10:00,0,0.055,"
          "sensor drifted; staff read 55 mm above it when technician A cleaned it\n"};
}

std::vector<TextFile> field_files(const Site& millmark, const Site& lowbridge) {
  std::vector<TextFile> files{station_file(), gauge_zero_file(millmark, lowbridge), reach_file()};
  for (auto& file : survey_files(millmark, lowbridge)) files.push_back(std::move(file));
  files.push_back(gauging_file(millmark, lowbridge));
  for (auto& file : stage_files(millmark, lowbridge)) files.push_back(std::move(file));
  files.push_back(stage_correction_file());
  return files;
}

std::vector<TextFile> truth_files(const Site& millmark, const Site& lowbridge) {
  std::vector<TextFile> files;
  std::string changes = "station,from,what\n";
  for (const Site* site : {&millmark, &lowbridge}) {
    std::string text = "time,discharge_m3s,level_m\n";
    for (std::size_t i = 0; i < site->flow_m3s.size(); ++i) {
      text +=
          utc_text(time_of(i)) + "," + fixed(site->flow_m3s[i], 5) + "," + fixed(site->level_m[i], 5) + "\n";
    }
    files.push_back({site->id + ".csv", std::move(text)});
    for (const State& state : site->states)
      changes += site->id + "," + utc_text(state.from) + "," + state.what + "\n";
  }
  files.push_back({"changes.csv", changes});
  return files;
}

}  // namespace scenario
